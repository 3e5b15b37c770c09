import type { Understood, UnderstoodTube } from '../../shared/measurements/tabular/understood'
import type { ColumnSpec, MeasurementKind } from '../../shared/measurements/types'
import { FIGURE_TOKENS, type FigureSpec } from '../../shared/schemas/figure'
import { storedUnit } from '../../shared/science/units'

const SERIES_TOKENS = FIGURE_TOKENS.filter(token => /^s\d$/.test(token))
const MOST_TUBES = 12
const MOST_POINTS = 400

/** Points as they were read, joined, tube by tube: a look before anything is stored, not a fit. null where there is nothing to draw. */
export function quickLook({ tubes, layout }: Understood, kind: MeasurementKind): FigureSpec | null {
  const shown = tubes.filter(tube => tube.role !== 'aside' && tube.points.rows.length > 0)
  const first = shown[0]
  if (!first) return null
  const [xField, yField] = first.points.columns.length > 1 && specOf(kind, first.points.columns[0])?.role === 'x' ? first.points.columns : [undefined, first.points.columns[0]]
  const y = specOf(kind, yField)
  const base = { id: 'quickLook', title: 'Quick look', caption: 'Points as read, joined; not a fit.', y: axisOf(y, yField) }
  if (xField === undefined) return { ...base, ...againstConcentration(shown) }
  const curves = shown.slice(0, MOST_TUBES)
  const isLog = curves.every(tube => tube.points.rows.every(([x]) => (x ?? 0) > 0))
  return {
    ...base,
    text: `${curves.length} of ${shown.length} tubes, read ${layout === 'long' ? 'row by row' : 'from a wide table'}.`,
    x: { ...axisOf(specOf(kind, xField), xField), scale: isLog ? 'log' : 'linear' },
    layers: curves.map((tube, i) => ({
      type: 'points', name: tube.label, token: SERIES_TOKENS[i % SERIES_TOKENS.length]!, joined: true, open: Math.floor(i / SERIES_TOKENS.length) % 2 === 1,
      points: pointsOf(tube),
    })),
  }
}

const specOf = (kind: MeasurementKind, field: string | undefined): ColumnSpec | undefined => kind.columns.find(column => column.field === field)

function axisOf(spec: ColumnSpec | undefined, field: string | undefined): FigureSpec['x'] {
  const unit = spec && spec.dimension !== 'text' && spec.dimension !== 'none' ? storedUnit(spec.dimension).symbol : null
  return { label: spec?.label ?? field ?? '', unit, scale: 'linear' }
}

function pointsOf({ points }: UnderstoodTube): { x: number, y: number }[] {
  const read = points.rows.flatMap(([x, y]) => x === null || x === undefined || y === null || y === undefined ? [] : [{ x, y }])
  return read.sort((a, b) => a.x - b.x).slice(0, MOST_POINTS)
}

function againstConcentration(tubes: readonly UnderstoodTube[]): Pick<FigureSpec, 'text' | 'x' | 'layers'> {
  const points = tubes.flatMap(tube => tube.conc_mM === null ? [] : tube.points.rows.flatMap(([y]) => y === null || y === undefined ? [] : [{ x: tube.conc_mM!, y, label: tube.label }]))
  return {
    text: `${tubes.length} tubes against their concentration.`,
    x: { label: 'concentration', unit: 'mM', scale: 'linear' },
    layers: [{ type: 'points', name: 'as read', token: 's1', joined: false, points }],
  }
}

import type { FigureLayer, FigureSpec, FigureToken } from '../../schemas/figure'
import type { AnalysisOutcome, SeriesResult, TubeResult } from '../types'

/** What the figures of one kind call their axes. */
export interface FigureWords {
  token: FigureToken
  tube: { x: { label: string, unit: string | null }, y: { label: string, unit: string | null } }
  /** Rate over concentration. */
  rate: { label: string, unit: string }
  caption: string
}

/** Notation on one line, for titles and text alternatives. */
const plain = (label: string): string => label.replace(/[_{}]/g, '')

/** Rates over concentration with line, band and what was left out; null where there is no series to draw. */
export function seriesFigureOf(outcome: AnalysisOutcome, words: FigureWords): FigureSpec | null {
  if (!outcome.ok) return null
  const { series } = outcome
  const used = series.points.filter(point => point.excluded === null)
  const out = series.points.filter(point => point.excluded !== null)
  return {
    id: 'series', title: `${plain(words.rate.label)} over concentration`, text: seriesText(series, words),
    caption: `${words.caption} Bars are ±1 SE, the band is the 95 % interval of the line.`,
    x: { label: 'Concentration', unit: 'mM', scale: 'linear' }, y: { label: words.rate.label, unit: words.rate.unit, scale: 'linear' },
    layers: seriesLayers(series, used, out, words),
    strip: { label: 'Residual, studentised', token: words.token, points: used.flatMap(point => point.studentised === null ? [] : [{ x: point.x, y: point.studentised }]) },
    table: seriesTable(series, words),
  }
}

type SeriesPoint = SeriesResult['points'][number]

function seriesLayers(series: SeriesResult, used: readonly SeriesPoint[], out: readonly SeriesPoint[], { token, rate }: FigureWords): FigureLayer[] {
  const at = (point: SeriesPoint) => ({ x: point.x, y: point.y, id: String(point.tubeNo), label: point.label })
  const bars = used.flatMap(({ x, y, ySe }) => ySe === null ? [] : [{ x, y, low: y - ySe, high: y + ySe }])
  return [
    { type: 'band', name: '95 % band', token, points: series.band },
    { type: 'line', name: 'line', token: 'ink', labelled: false, points: series.line },
    ...(series.curve ? [{ type: 'line' as const, name: series.curve.name, token: 's2' as const, dash: 'dashed' as const, points: series.curve.points }] : []),
    ...(bars.length > 0 ? [{ type: 'errorBars' as const, name: '±1 SE', token, points: bars }] : []),
    { type: 'points', name: rate.label, token, points: used.map(at) },
    ...(out.length > 0 ? [{ type: 'cross' as const, name: 'left out', points: out.map(at) }] : []),
  ]
}

function seriesText({ headline, points }: SeriesResult, { rate }: FigureWords): string {
  const out = points.filter(point => point.excluded !== null).length
  const leftOut = out === 0 ? '' : ` ${out} of them left out.`
  const se = headline.se === null ? '' : ` ± ${headline.se.toPrecision(2)}`
  return `${plain(rate.label)} of ${points.length} tubes rises with concentration by ${headline.value.toPrecision(4)}${se} per mM.${leftOut}`
}

function seriesTable({ points }: SeriesResult, { rate }: FigureWords): FigureSpec['table'] {
  return {
    columns: [
      { key: 'tube', label: 'Tube', unit: null, numeric: false }, { key: 'x', label: 'Concentration', unit: 'mM', numeric: true }, { key: 'y', label: rate.label, unit: rate.unit, numeric: true },
      { key: 'se', label: 'SE', unit: rate.unit, numeric: true }, { key: 'fitted', label: 'Line', unit: rate.unit, numeric: true }, { key: 'studentised', label: 'Residual, studentised', unit: null, numeric: true },
      { key: 'excluded', label: 'Left out', unit: null, numeric: false },
    ],
    rows: points.map(point => ({ tube: point.label, x: point.x, y: point.y, se: point.ySe, fitted: point.fitted, studentised: point.studentised, excluded: point.excluded })),
  }
}

/** Points of one tube with the fitted curve and what was left out, residuals beneath. */
export function tubeFigureOf(tube: TubeResult, words: FigureWords): FigureSpec {
  const used = tube.points.filter(point => point.excluded === null)
  const out = tube.points.filter(point => point.excluded !== null)
  const at = (point: TubeResult['points'][number]) => ({ x: point.x, y: point.y, id: String(point.index) })
  const strip = tube.points.flatMap(point => point.studentised === null ? [] : [{ x: point.x, y: point.studentised, out: point.excluded !== null }])
  return {
    id: `tube-${tube.tubeNo}`, title: tube.label, text: tubeText(tube), x: { ...words.tube.x, scale: 'linear' }, y: { ...words.tube.y, scale: 'linear' },
    layers: [
      ...(tube.curve.length > 0 ? [{ type: 'line' as const, name: 'fit', token: 'ink' as const, labelled: false, points: tube.curve }] : []),
      { type: 'points', name: words.tube.y.label, token: words.token, points: used.map(at) },
      ...(out.length > 0 ? [{ type: 'cross' as const, name: 'left out', points: out.map(at) }] : []),
    ],
    ...(strip.length > 0 ? { strip: { label: 'Residual, studentised', token: words.token, points: strip } } : {}),
    table: {
      columns: [
        { key: 'x', label: words.tube.x.label, unit: words.tube.x.unit, numeric: true }, { key: 'y', label: words.tube.y.label, unit: words.tube.y.unit, numeric: true },
        { key: 'fitted', label: 'Fit', unit: words.tube.y.unit, numeric: true }, { key: 'studentised', label: 'Residual, studentised', unit: null, numeric: true }, { key: 'excluded', label: 'Left out', unit: null, numeric: false },
      ],
      rows: tube.points.map(point => ({ x: point.x, y: point.y, fitted: point.fitted, studentised: point.studentised, excluded: point.excluded })),
    },
  }
}

function tubeText({ label, points, headline, refusal }: TubeResult): string {
  const out = points.filter(point => point.excluded !== null).length
  const leftOut = out === 0 ? '' : `, ${out} of them left out`
  if (headline === null) return `${label}: ${points.length} points${leftOut}; ${refusal?.message ?? 'no fit.'}`
  const se = headline.se === null ? '' : ` ± ${headline.se.toPrecision(2)}`
  return `${label}: ${points.length} points${leftOut}; ${plain(headline.label)} ${headline.value.toPrecision(4)}${se} ${headline.unit}.`
}

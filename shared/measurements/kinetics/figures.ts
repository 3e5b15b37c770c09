import type { FigureSpec, FigureToken } from '../../schemas/figure'
import { tubeFigureOf, type FigureWords } from '../relaxation/figures'
import type { AnalysisOutcome, SeriesResult, TubeResult } from '../types'

const TOKEN: FigureToken = 's1'
const plain = (label: string): string => label.replace(/[_{}^]/g, '')

/** A course over its time, in the unit that its length asks for. */
export function courseFigure(tube: TubeResult, y: { label: string, unit: string | null }, caption?: string): FigureSpec {
  const longest_s = Math.max(0, ...tube.points.map(point => point.x))
  const [unit, size] = longest_s > 4 * 86_400 ? ['d', 86_400] as const : longest_s > 7200 ? ['h', 3600] as const : longest_s > 300 ? ['min', 60] as const : ['s', 1] as const
  const scaled: TubeResult = { ...tube, points: tube.points.map(point => ({ ...point, x: point.x / size })), curve: tube.curve.map(({ x, y: value }) => ({ x: x / size, y: value })) }
  const words: FigureWords = { token: TOKEN, tube: { x: { label: 'Time', unit }, y }, rate: { label: '', unit: '' }, caption: '' }
  return { ...tubeFigureOf(scaled, words), ...(caption ? { caption } : {}) }
}

/** Rates of a series with the law through them; null where there is only one condition to draw. */
export function lawFigure(outcome: AnalysisOutcome, caption = 'Bars are ±1 SE.'): FigureSpec | null {
  if (!outcome.ok || !outcome.series.axes || outcome.series.line.length === 0) return null
  const { series } = outcome
  const { x, y } = outcome.series.axes
  const used = series.points.filter(point => point.excluded === null)
  const out = series.points.filter(point => point.excluded !== null)
  const at = (point: SeriesResult['points'][number]) => ({ x: point.x, y: point.y, id: String(point.tubeNo), label: point.label })
  const bars = used.flatMap(({ x: px, y: py, ySe }) => ySe === null || (y.scale === 'log' && ySe >= py) ? [] : [{ x: px, y: py, low: py - ySe, high: py + ySe }])
  return {
    id: 'series', title: `${plain(y.label)} over ${plain(x.label)}`, caption, x, y,
    text: `${plain(y.label)} of ${used.length} flasks over ${plain(x.label)}, with the fitted curve.${out.length === 0 ? '' : ` ${out.length} left out.`}`,
    layers: [
      ...(series.band.length > 0 ? [{ type: 'band' as const, name: '95 % band', token: TOKEN, points: series.band }] : []),
      { type: 'line', name: 'law', token: 'ink', labelled: false, points: series.line },
      ...(bars.length > 0 ? [{ type: 'errorBars' as const, name: '±1 SE', token: TOKEN, points: bars }] : []),
      { type: 'points', name: y.label, token: TOKEN, points: used.map(at) },
      ...(out.length > 0 ? [{ type: 'cross' as const, name: 'left out', points: out.map(at) }] : []),
    ],
    table: {
      columns: [
        { key: 'flask', label: 'Flask', unit: null, numeric: false }, { key: 'x', label: x.label, unit: x.unit, numeric: true }, { key: 'y', label: y.label, unit: y.unit, numeric: true },
        { key: 'se', label: 'SE', unit: y.unit, numeric: true }, { key: 'fitted', label: 'Law', unit: y.unit, numeric: true }, { key: 'excluded', label: 'Left out', unit: null, numeric: false },
      ],
      rows: series.points.map(point => ({ flask: point.label, x: point.x, y: point.y, se: point.ySe, fitted: point.fitted, excluded: point.excluded })),
    },
  }
}

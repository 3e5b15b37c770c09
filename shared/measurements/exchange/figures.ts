import type { FigureSpec } from '../../schemas/figure'
import { tubeFigureOf } from '../relaxation/figures'
import type { AnalysisOutcome, SeriesResult, TubeResult } from '../types'

const plain = (label: string): string => label.replace(/[_{}^]/g, '')

/** Spectra of a tube over the offset from water, which runs from right to left; each spectrum has its own curve. */
export function spectrumFigure(tube: TubeResult): FigureSpec {
  const words = { token: 'cest' as const, tube: { x: { label: 'Offset from water', unit: 'ppm' }, y: { label: 'Z', unit: null } }, rate: { label: '', unit: '' }, caption: '' }
  const figure = tubeFigureOf({ ...tube, curve: [] }, words)
  const curves = splitCurves(tube.curve)
  const residuals = tube.points.flatMap(point => point.residual === null ? [] : [{ x: point.x, y: point.residual }])
  const spread = Math.sqrt(residuals.reduce((sum, one) => sum + one.y * one.y, 0) / Math.max(1, residuals.length))
  return {
    ...figure, x: { ...figure.x, reversed: true },
    layers: [...curves.map((points, i) => ({ type: 'line' as const, name: curves.length > 1 ? `pools, spectrum ${i + 1}` : 'pools', token: 'ink' as const, labelled: false, points })), ...figure.layers],
    ...(spread > 0 ? { strip: { label: 'Residual of Z', token: 'cest' as const, limit: 4 * spread, points: residuals } } : {}),
  }
}

/** Curves stand one after the other, each with rising offsets. */
function splitCurves(curve: TubeResult['curve']): { x: number, y: number }[][] {
  const curves: { x: number, y: number }[][] = []
  for (const point of curve) {
    const last = curves.at(-1)
    if (last && point.x > last.at(-1)!.x) last.push(point)
    else curves.push([point])
  }
  return curves
}

/** Transfer over B1 or saturation time, or the omega plot, with the curve of the method. */
export function rateFigure(outcome: AnalysisOutcome): FigureSpec | null {
  if (!outcome.ok || !outcome.series.axes) return null
  const { series } = outcome
  const { x, y } = outcome.series.axes
  const at = (point: SeriesResult['points'][number]) => ({ x: point.x, y: point.y, id: String(point.tubeNo), label: point.label })
  const bars = series.points.flatMap(({ x: px, y: py, ySe }) => ySe === null ? [] : [{ x: px, y: py, low: py - ySe, high: py + ySe }])
  return {
    id: 'series', title: `${plain(y.label)} over ${plain(x.label)}`, caption: 'Bars are ±1 SE.', x, y,
    text: `${plain(y.label)} of ${series.points.length} spectra over ${plain(x.label)}, with the fitted curve; exchange rate ${series.headline.value.toPrecision(4)} s⁻¹.`,
    layers: [
      ...(series.line.length > 0 ? [{ type: 'line' as const, name: 'fit', token: 'ink' as const, labelled: false, points: series.line }] : []),
      ...(bars.length > 0 ? [{ type: 'errorBars' as const, name: '±1 SE', token: 'cest' as const, points: bars }] : []),
      { type: 'points', name: y.label, token: 'cest', points: series.points.map(at) },
    ],
    table: {
      columns: [
        { key: 'spectrum', label: 'Spectrum', unit: null, numeric: false }, { key: 'x', label: x.label, unit: x.unit, numeric: true }, { key: 'y', label: y.label, unit: y.unit, numeric: true },
        { key: 'se', label: 'SE', unit: y.unit, numeric: true }, { key: 'fitted', label: 'Fit', unit: y.unit, numeric: true },
      ],
      rows: series.points.map(point => ({ spectrum: point.label, x: point.x, y: point.y, se: point.ySe, fitted: point.fitted })),
    },
  }
}

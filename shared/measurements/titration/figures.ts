import type { FigureLayer, FigureSpec, FigureToken } from '../../schemas/figure'
import { tubeFigureOf } from '../relaxation/figures'
import type { AnalysisOutcome, TubeResult } from '../types'
import { READINGS } from './calibration'

const TOKENS: readonly FigureToken[] = ['s1', 's2', 's3', 's4', 's5', 's6']
const has = (tube: TubeResult, name: string): boolean => tube.parameters.some(one => one.name === name)

/** A curve over the base added, or a batch series flask by flask. */
export function curveFigure(tube: TubeResult): FigureSpec {
  const x = has(tube, READINGS.batch) ? { label: 'Flask', unit: null } : { label: 'Base added', unit: 'mL' }
  const y = has(tube, READINGS.mV) ? { label: 'Reading', unit: 'mV' } : { label: 'pH', unit: null }
  return tubeFigureOf(tube, { token: 's1', tube: { x, y }, rate: { label: '', unit: '' }, caption: '' })
}

/** Residuals of all curves over pH: what the constants leave unexplained, and where. null without a refinement. */
export function residualFigure(outcome: AnalysisOutcome): FigureSpec | null {
  if (!outcome.ok) return null
  const curves = outcome.tubes.filter(tube => tube.headline?.name === 'rms_pH')
  if (curves.length === 0) return null
  const layers = curves.map((tube, i): FigureLayer => ({
    type: 'points', name: tube.label, token: TOKENS[i % TOKENS.length]!, open: Math.floor(i / TOKENS.length) % 2 === 1,
    points: tube.points.flatMap(({ y, residual }) => residual === null ? [] : [{ x: y, y: residual, id: String(tube.tubeNo), label: tube.label }]),
  }))
  const count = curves.reduce((sum, tube) => sum + tube.points.filter(point => point.residual !== null).length, 0)
  return {
    id: 'series', title: 'Residuals over pH', caption: 'Measured less fitted pH, every curve.', x: { label: 'pH', unit: null, scale: 'linear' }, y: { label: 'Residual', unit: 'pH', scale: 'linear' },
    text: `Residuals of ${count} points of ${curves.length} ${curves.length === 1 ? 'curve' : 'curves'} over pH; root mean square ${curves.map(tube => `${tube.headline!.value.toPrecision(2)} (${tube.label})`).join(', ')}.`,
    layers: [{ type: 'rule', name: 'no residual', axis: 'y', at: 0, dash: 'dashed' }, ...layers],
    table: {
      columns: [
        { key: 'curve', label: 'Curve', unit: null, numeric: false }, { key: 'x', label: 'pH', unit: null, numeric: true }, { key: 'fitted', label: 'Fitted pH', unit: null, numeric: true }, { key: 'residual', label: 'Residual', unit: null, numeric: true },
        { key: 'studentised', label: 'Residual, studentised', unit: null, numeric: true },
      ],
      rows: curves.flatMap(tube => tube.points.filter(point => point.residual !== null).map(({ y, fitted, residual, studentised }) => ({ curve: tube.label, x: y, fitted, residual, studentised }))),
    },
  }
}

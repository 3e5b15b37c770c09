/** log K of a ligand not yet measured from ΣpKa, by the straight line through ligands that were: an estimate, and marked as one. */
import { fitLine, studentFactor } from '../least-squares/line'

export interface BasicityPoint {
  readonly ligand: string
  readonly sumPKa: number
  readonly logK: number
}

export interface EstimatedLogK {
  readonly ok: true
  /** Never a measured value: carried wherever the number goes. */
  readonly basis: 'estimate'
  readonly logK: number
  /** 95 % prediction interval for one new ligand. */
  readonly interval: readonly [number, number]
  readonly slope: number
  readonly intercept: number
  readonly slopeSe: number
  readonly points: number
  /** Scatter of log K about the line. */
  readonly scatter: number
  readonly warnings: readonly string[]
}

export interface EstimateRefused {
  readonly ok: false
  readonly reason: 'tooFewPoints' | 'equalX' | 'notFinite'
  readonly message: string
  readonly accepted: string
}

/** A prediction from fewer lies within anything. */
const FEWEST = 4

/**
 * Predicts log K at `sumPKa`; all constants must be of one metal and one medium (see comparable).
 * A straight line is what ligands of one donor family show (common practice, no source).
 */
export function estimateLogK(known: readonly BasicityPoint[], sumPKa: number): EstimatedLogK | EstimateRefused {
  if (!Number.isFinite(sumPKa)) return { ok: false, reason: 'notFinite', message: `ΣpKa is ${sumPKa}.`, accepted: 'The sum of the protonation constants of the ligand.' }
  if (known.length < FEWEST) return { ok: false, reason: 'tooFewPoints', message: `${known.length} ligands are measured.`, accepted: `At least ${FEWEST} ligands with log K and ΣpKa in one medium.` }
  const line = fitLine({ x: known.map(one => one.sumPKa), y: known.map(one => one.logK) })
  if (!line.ok) return { ok: false, reason: line.reason === 'equalX' ? 'equalX' : 'notFinite', message: line.message, accepted: line.accepted }
  const { slopeSe, interceptSe, covariance, sigma } = line
  if (slopeSe === null || interceptSe === null || covariance === null || sigma === null) return { ok: false, reason: 'tooFewPoints', message: 'The line has no scatter to judge by.', accepted: `At least ${FEWEST} ligands.` }
  const logK = line.intercept + line.slope * sumPKa
  const variance = sigma ** 2 + interceptSe ** 2 + 2 * sumPKa * covariance + (sumPKa * slopeSe) ** 2
  const half = studentFactor(0.95, line.dof) * Math.sqrt(variance)
  return {
    ok: true, basis: 'estimate', logK, interval: [logK - half, logK + half], slope: line.slope, intercept: line.intercept, slopeSe, points: known.length, scatter: sigma,
    warnings: warningsOf(known, sumPKa, line.slopeInterval),
  }
}

function warningsOf(known: readonly BasicityPoint[], sumPKa: number, slopeInterval: readonly [number, number] | null): string[] {
  const sums = known.map(one => one.sumPKa)
  const [low, high] = [Math.min(...sums), Math.max(...sums)]
  const warnings: string[] = []
  if (sumPKa < low || sumPKa > high) warnings.push(`ΣpKa of ${sumPKa} lies outside the ligands measured (${low} to ${high}): extrapolated.`)
  if (slopeInterval && slopeInterval[0] <= 0) warnings.push('The slope is not distinguishable from zero: these ligands show no line.')
  return warnings
}

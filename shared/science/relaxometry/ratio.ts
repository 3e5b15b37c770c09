import type { LineEstimate, RelaxivityDone, RelaxivityTube } from './relaxivity'
import { normalQuantile } from '../statistics'

/**
 * r2/r1 of one set of tubes measured both ways. The common scale error is the same factor in both and cancels; errors of the single concentrations move
 * both slopes together, which is taken into account by the first-order change of each slope with each concentration.
 * @param tubes the tubes of both lines, in the same order
 * @returns null when the two lines do not stand on the same tubes or r1 is not positive
 * @source propagation of errors to first order, with the covariance of the two slopes
 */
export function relaxivityRatio(r1: RelaxivityDone, r2: RelaxivityDone, tubes: readonly RelaxivityTube[]): LineEstimate | null {
  const areSame = r1.points.length === tubes.length && r2.points.length === tubes.length
    && tubes.every((tube, i) => tube.conc_mM === r1.points[i]!.conc_mM && tube.conc_mM === r2.points[i]!.conc_mM)
  const [a, b] = [r1.relaxivity_per_mM_s.value, r2.relaxivity_per_mM_s.value]
  if (!areSame || !(a > 0)) return null
  const value = b / a
  if (r1.fitSe_per_mM_s === null || r2.fitSe_per_mM_s === null) return { value, se: null, interval: null }
  const pulls = [r1, r2].map(series => slopePulls(series, tubes))
  const covariance = tubes.reduce((sum, tube, i) => sum + a * b * pulls[0]![i]! * pulls[1]![i]! * (tube.concSe_mM ?? 0) ** 2, 0)
  const variance = value ** 2 * ((r1.fitSe_per_mM_s / a) ** 2 + (r2.fitSe_per_mM_s / b) ** 2 - (2 * covariance) / (a * b))
  const se = Math.sqrt(Math.max(0, variance))
  const half = normalQuantile((1 + r1.level) / 2) * se
  return { value, se, interval: [value - half, value + half] }
}

/** Change of the slope per change of each rate: wᵢ·(xᵢ − x̄)/Sxx. */
function slopePulls(series: RelaxivityDone, tubes: readonly RelaxivityTube[]): number[] {
  const weights = series.points.map(({ rateSe_per_s }, i) => {
    if (rateSe_per_s === null) return 1
    return 1 / (rateSe_per_s ** 2 + (series.relaxivity_per_mM_s.value * (tubes[i]!.concSe_mM ?? 0)) ** 2)
  })
  const total = weights.reduce((sum, w) => sum + w, 0)
  const mean = tubes.reduce((sum, tube, i) => sum + weights[i]! * tube.conc_mM, 0) / total
  const sxx = tubes.reduce((sum, tube, i) => sum + weights[i]! * (tube.conc_mM - mean) ** 2, 0)
  return tubes.map((tube, i) => (weights[i]! * (tube.conc_mM - mean)) / sxx)
}

import { createRandom } from '../random'
import { tQuantile } from '../statistics'
import type { LineEstimate } from './relaxivity'

/** One tube measured both ways. */
export interface PairedTube {
  readonly conc_mM: number
  readonly rate1_per_s: number
  readonly rate1Se_per_s: number | null
  readonly rate2_per_s: number
  readonly rate2Se_per_s: number | null
}

export interface RatioBootstrap extends LineEstimate {
  readonly slope1_per_mM_s: number
  readonly slope2_per_mM_s: number
  /** Correlation of the two slopes over the draws: above 0 where tubes are off in concentration. */
  readonly correlation: number
  readonly draws: number
}

const LEAST_TUBES = 4

interface Line { readonly slope: number, readonly intercept: number, readonly weights: readonly number[], readonly mean: number, readonly sxx: number }

/**
 * r2/r1 of tubes measured both ways, with its error by a paired residual bootstrap: a tube whose concentration is off leaves residuals in both lines, so both residuals
 * of one tube are drawn together. An error common to all concentrations moves neither line's shape and cancels in the ratio.
 *
 * Residuals are taken in units of the rates' errors, divided by √(1 − leverage) and centred; new rates are the lines plus drawn residuals, refitted with the same weights.
 * The interval is Student's about the value, with the standard deviation of the draws and tubes − 2 degrees of freedom: percentiles of so few residuals cover 87 % at
 * five tubes and 91 % at seven (simulated).
 * @param level coverage of the interval
 * @returns null with fewer than four tubes, equal concentrations, or a slope r1 that is not above 0
 * @source Davison & Hinkley, Bootstrap Methods and Their Application (1997), section 6.2.3, residuals drawn in pairs
 */
export function bootstrapRatio(tubes: readonly PairedTube[], { seed, draws = 2000, level = 0.95 }: { seed: string, draws?: number, level?: number }): RatioBootstrap | null {
  if (tubes.length < LEAST_TUBES) return null
  const x = tubes.map(tube => tube.conc_mM)
  const weights = (se: (tube: PairedTube) => number | null) => tubes.every(tube => (se(tube) ?? 0) > 0) ? tubes.map(tube => 1 / se(tube)! ** 2) : tubes.map(() => 1)
  const rates1 = tubes.map(tube => tube.rate1_per_s)
  const rates2 = tubes.map(tube => tube.rate2_per_s)
  const line1 = weightedLine(x, rates1, weights(tube => tube.rate1Se_per_s))
  const line2 = weightedLine(x, rates2, weights(tube => tube.rate2Se_per_s))
  if (!(line1.sxx > 0) || !(line1.slope > 0)) return null
  const [e1, e2] = [modified(x, rates1, line1), modified(x, rates2, line2)]
  const random = createRandom(seed)
  const [slopes1, slopes2, ratios]: [number[], number[], number[]] = [[], [], []]
  for (let k = 0; k < draws; k++) {
    const drawn = tubes.map(() => Math.floor(random.uniform() * tubes.length))
    const a = slopeOf(x, line1, drawn.map((j, i) => line1.intercept + line1.slope * x[i]! + e1[j]! / Math.sqrt(line1.weights[i]!)))
    const b = slopeOf(x, line2, drawn.map((j, i) => line2.intercept + line2.slope * x[i]! + e2[j]! / Math.sqrt(line2.weights[i]!)))
    if (!(a > 0)) continue
    slopes1.push(a)
    slopes2.push(b)
    ratios.push(b / a)
  }
  if (ratios.length < 0.9 * draws) return null
  const value = line2.slope / line1.slope
  const se = spread(ratios)
  const half = tQuantile((1 + level) / 2, tubes.length - 2) * se
  return {
    value, se, interval: [value - half, value + half], slope1_per_mM_s: line1.slope, slope2_per_mM_s: line2.slope,
    correlation: correlation(slopes1, slopes2), draws: ratios.length,
  }
}

function weightedLine(x: readonly number[], y: readonly number[], weights: readonly number[]): Line {
  const total = weights.reduce((sum, w) => sum + w, 0)
  const mean = x.reduce((sum, value, i) => sum + weights[i]! * value, 0) / total
  const meanY = y.reduce((sum, value, i) => sum + weights[i]! * value, 0) / total
  const sxx = x.reduce((sum, value, i) => sum + weights[i]! * (value - mean) ** 2, 0)
  const slope = x.reduce((sum, value, i) => sum + weights[i]! * (value - mean) * (y[i]! - meanY), 0) / sxx
  return { slope, intercept: meanY - slope * mean, weights, mean, sxx }
}

const slopeOf = (x: readonly number[], { weights, mean, sxx }: Line, y: readonly number[]): number => x.reduce((sum, value, i) => sum + weights[i]! * (value - mean) * y[i]!, 0) / sxx

/** Residuals of equal variance in units of the rates' errors, centred. */
function modified(x: readonly number[], y: readonly number[], { slope, intercept, weights, mean, sxx }: Line): number[] {
  const total = weights.reduce((sum, w) => sum + w, 0)
  const raw = x.map((value, i) => {
    const leverage = weights[i]! / total + (weights[i]! * (value - mean) ** 2) / sxx
    return (Math.sqrt(weights[i]!) * (y[i]! - intercept - slope * value)) / Math.sqrt(Math.max(1e-9, 1 - leverage))
  })
  const centre = raw.reduce((sum, e) => sum + e, 0) / raw.length
  return raw.map(e => e - centre)
}

function spread(values: readonly number[]): number {
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length
  return Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1))
}

function correlation(a: readonly number[], b: readonly number[]): number {
  const [meanA, meanB] = [a, b].map(values => values.reduce((sum, value) => sum + value, 0) / values.length)
  let [ab, aa, bb] = [0, 0, 0]
  a.forEach((value, i) => {
    ab += (value - meanA!) * (b[i]! - meanB!)
    aa += (value - meanA!) ** 2
    bb += (b[i]! - meanB!) ** 2
  })
  return aa > 0 && bb > 0 ? ab / Math.sqrt(aa * bb) : 0
}

import { chi2UpperP, tQuantile, tTwoSidedP } from '../statistics'
import { studentise } from './covariance'

export interface LineData {
  readonly x: readonly number[]
  readonly y: readonly number[]
  /** Standard error of each y; absent for an unweighted line. */
  readonly sigma?: readonly number[] | null
  /** Degrees of freedom σ itself was estimated with; null or absent = taken as well known. */
  readonly sigmaDof?: number | null
}

export interface LineOptions {
  /** Coverage of the interval. Default 0.95. */
  readonly level?: number
}

/** One point of a fitted line. */
export interface LinePoint {
  readonly fitted: number
  /** y − fitted. */
  readonly residual: number
  readonly leverage: number
  readonly studentised: number | null
  /** Cook's distance; null where the leverage is 1 or there are no degrees of freedom. */
  readonly cook: number | null
  /** Slope and intercept of the line through the other points; null where they do not make a line. */
  readonly without: { readonly slope: number, readonly intercept: number } | null
}

export interface LineDone {
  readonly ok: true
  readonly slope: number
  readonly intercept: number
  /** Null with two points and no known σ. */
  readonly slopeSe: number | null
  readonly interceptSe: number | null
  readonly covariance: number | null
  readonly slopeInterval: readonly [number, number] | null
  readonly interceptInterval: readonly [number, number] | null
  /** Points minus 2. */
  readonly dof: number
  /** Degrees of freedom of the interval: those of what the errors rest on, the scatter about the line or σ as given; null = unlimited. */
  readonly intervalDof: number | null
  readonly level: number
  readonly sigmaUsed: 'known' | 'estimated'
  /** Weighted sum of squares; with σ known it is χ². */
  readonly rss: number
  /** Null with σ unknown or no degrees of freedom. */
  readonly reducedChi2: number | null
  /** Probability of a χ² this large; null as above. */
  readonly chi2P: number | null
  /** Standard deviation of one point of unit weight: s with σ unknown, max(1, √χ²red) with σ known; null when it cannot be had. */
  readonly sigma: number | null
  readonly r2: number
  /** Two-sided p of a quadratic term added to the line; null with fewer than four points or three different x. */
  readonly quadraticP: number | null
  readonly points: readonly LinePoint[]
}

export interface LineRefused {
  readonly ok: false
  readonly reason: 'lengthMismatch' | 'notFinite' | 'badSigma' | 'tooFewPoints' | 'equalX'
  readonly message: string
  readonly accepted: string
}

export type LineOutcome = LineDone | LineRefused

interface Sums {
  readonly weights: readonly number[]
  readonly total: number
  readonly meanX: number
  readonly meanY: number
  readonly sxx: number
  readonly slope: number
}

/**
 * Weighted straight line y = intercept + slope·x, with what is needed to judge it.
 *
 * With σ known the errors are those of (XᵀWX)⁻¹ scaled by max(1, χ²red); otherwise by s². Intervals are Student's with the degrees of freedom of what the
 * errors rest on: n − 2 where they come from the scatter about the line, those of σ where the scatter does not exceed it. Sums are taken about the weighted
 * means, so no digits are lost to a far-off origin.
 * @source Draper & Smith, Applied Regression Analysis, 3rd ed. (1998), chapters 1, 8 and 9; Cook, Technometrics 19, 15 (1977)
 */
export function fitLine(data: LineData, { level = 0.95 }: LineOptions = {}): LineOutcome {
  const refusal = refuseLine(data)
  if (refusal) return refusal
  const { x, y, sigma = null } = data
  const n = x.length
  const sums = sumUp(x, y, x.map((_, i) => sigma ? 1 / sigma[i]! ** 2 : 1))
  const intercept = sums.meanY - sums.slope * sums.meanX
  const dof = n - 2
  const residuals = y.map((value, i) => value - (sums.meanY + sums.slope * (x[i]! - sums.meanX)))
  const rss = residuals.reduce((sum, e, i) => sum + sums.weights[i]! * e * e, 0)
  const variance = dof > 0 ? (sigma ? Math.max(1, rss / dof) : rss / dof) : sigma ? 1 : null
  const slopeSe = variance === null ? null : Math.sqrt(variance / sums.sxx)
  const interceptSe = variance === null ? null : Math.sqrt(variance * (1 / sums.total + sums.meanX ** 2 / sums.sxx))
  const intervalDof = sigma && rss <= dof ? data.sigmaDof ?? null : dof
  const half = dof > 0 ? studentFactor(level, intervalDof) : null
  const around = (value: number, se: number | null) => se === null || half === null ? null : [value - half * se, value + half * se] as const
  const spread = y.reduce((sum, value, i) => sum + sums.weights[i]! * (value - sums.meanY) ** 2, 0)
  return {
    ok: true, slope: sums.slope, intercept, slopeSe, interceptSe, covariance: variance === null ? null : (-variance * sums.meanX) / sums.sxx,
    slopeInterval: around(sums.slope, slopeSe), interceptInterval: around(intercept, interceptSe), dof, intervalDof, level, sigmaUsed: sigma ? 'known' : 'estimated', rss,
    reducedChi2: sigma && dof > 0 ? rss / dof : null, chi2P: sigma && dof > 0 ? chi2UpperP(rss, dof) : null,
    sigma: variance === null ? null : Math.sqrt(variance), r2: spread > 0 ? 1 - rss / spread : 1, quadraticP: quadraticP(data, sums), points: judgePoints(data, sums, residuals),
  }
}

/** What a confidence band needs of a line, however it was fitted. */
export type BandLine = Pick<LineDone, 'slope' | 'intercept' | 'slopeSe' | 'interceptSe' | 'covariance' | 'dof' | 'intervalDof' | 'level'>

/** Value of the line at x with the half-width of its confidence band; null where the line has no interval. */
export function lineBand(line: BandLine, x: number): { value: number, halfWidth: number | null } {
  const value = line.intercept + line.slope * x
  if (line.dof < 1 || line.slopeSe === null || line.interceptSe === null || line.covariance === null) return { value, halfWidth: null }
  const variance = line.interceptSe ** 2 + 2 * x * line.covariance + (x * line.slopeSe) ** 2
  return { value, halfWidth: studentFactor(line.level, line.intervalDof) * Math.sqrt(Math.max(0, variance)) }
}

/** Student's factor of a two-sided interval; null = unlimited degrees of freedom. */
export function studentFactor(level: number, dof: number | null): number {
  return tQuantile((1 + level) / 2, dof ?? Infinity)
}

function refuseLine({ x, y, sigma }: LineData): LineRefused | null {
  const refuse = (reason: LineRefused['reason'], message: string, accepted: string): LineRefused => ({ ok: false, reason, message, accepted })
  if (x.length !== y.length || (sigma && sigma.length !== x.length)) return refuse('lengthMismatch', 'The lists have different lengths.', 'One y and one error for each x.')
  const bad = x.findIndex((value, i) => !Number.isFinite(value) || !Number.isFinite(y[i]))
  if (bad >= 0) return refuse('notFinite', `Point ${bad + 1} is not a pair of numbers.`, 'Finite numbers.')
  const badSigma = sigma ? sigma.findIndex(s => !(s > 0 && s < Infinity)) : -1
  if (badSigma >= 0) return refuse('badSigma', `Point ${badSigma + 1}: the error is ${sigma![badSigma]}.`, 'An error above 0 for every point.')
  if (x.length < 2) return refuse('tooFewPoints', `A line needs two points; ${x.length} given.`, 'At least 2 points; 3 for an interval.')
  if (x.every(value => value === x[0])) return refuse('equalX', `Every point stands at x = ${x[0]}.`, 'Points at two or more different x.')
  return null
}

function sumUp(x: readonly number[], y: readonly number[], weights: readonly number[]): Sums {
  const total = weights.reduce((sum, w) => sum + w, 0)
  const meanX = x.reduce((sum, value, i) => sum + weights[i]! * value, 0) / total
  const meanY = y.reduce((sum, value, i) => sum + weights[i]! * value, 0) / total
  let sxx = 0
  let sxy = 0
  x.forEach((value, i) => {
    sxx += weights[i]! * (value - meanX) ** 2
    sxy += weights[i]! * (value - meanX) * (y[i]! - meanY)
  })
  return { weights, total, meanX, meanY, sxx, slope: sxy / sxx }
}

function judgePoints({ x, y }: LineData, sums: Sums, residuals: readonly number[]): LinePoint[] {
  const n = x.length
  const leverage = x.map((value, i) => sums.weights[i]! * (1 / sums.total + (value - sums.meanX) ** 2 / sums.sxx))
  const weighted = Float64Array.from(residuals, (e, i) => e * Math.sqrt(sums.weights[i]!))
  const studentised = studentise(weighted, Float64Array.from(leverage), n - 2)
  const s2 = n > 2 ? weighted.reduce((sum, e) => sum + e * e, 0) / (n - 2) : 0
  return x.map((_, i) => {
    const open = 1 - leverage[i]!
    return {
      fitted: y[i]! - residuals[i]!, residual: residuals[i]!, leverage: leverage[i]!, studentised: studentised[i]!,
      cook: open > 1e-10 && s2 > 0 ? (weighted[i]! ** 2 * leverage[i]!) / (2 * s2 * open * open) : null,
      without: open > 1e-10 ? withoutPoint(sums, { at: x[i]!, weight: sums.weights[i]!, residual: residuals[i]!, open }) : null,
    }
  })
}

/** Line through the other points, from this one's residual and leverage: leaving a point out shifts value and slope at the mean by known amounts. */
function withoutPoint({ total, meanX, meanY, sxx, slope }: Sums, { at, weight, residual, open }: { at: number, weight: number, residual: number, open: number }): { slope: number, intercept: number } {
  const pull = (weight * residual) / open
  const other = slope - (pull * (at - meanX)) / sxx
  return { slope: other, intercept: meanY - pull / total - other * meanX }
}

/**
 * p of the coefficient of x² added to the line, with the scatter about the parabola as error. The parabola's new column is made orthogonal to the line
 * first, so its coefficient is one projection.
 */
function quadraticP({ x, y }: LineData, sums: Sums): number | null {
  const n = x.length
  if (n < 4 || new Set(x).size < 3) return null
  const square = x.map(value => (value - sums.meanX) ** 2)
  const fit = sumUp(x, square, sums.weights)
  const bend = square.map((value, i) => value - fit.meanY - fit.slope * (x[i]! - sums.meanX))
  const flat = y.map((value, i) => value - sums.meanY - sums.slope * (x[i]! - sums.meanX))
  const bendSize = bend.reduce((sum, b, i) => sum + sums.weights[i]! * b * b, 0)
  const coefficient = bend.reduce((sum, b, i) => sum + sums.weights[i]! * b * flat[i]!, 0) / bendSize
  const rss = flat.reduce((sum, e, i) => sum + sums.weights[i]! * (e - coefficient * bend[i]!) ** 2, 0)
  const se = Math.sqrt(rss / (n - 3) / bendSize)
  return se > 0 ? tTwoSidedP(coefficient / se, n - 3) : null
}

import { chi2UpperP } from '../statistics'
import { studentFactor } from './line'

export interface YorkData {
  readonly x: readonly number[]
  readonly y: readonly number[]
  /** Standard error of each x, ≥ 0. */
  readonly xSigma: readonly number[]
  /** Standard error of each y, ≥ 0; not both zero at one point. */
  readonly ySigma: readonly number[]
  /** Correlation of the two errors of each point. Default 0. */
  readonly correlation?: readonly number[]
  /** Degrees of freedom the errors were estimated with; null or absent = taken as well known. */
  readonly sigmaDof?: number | null
}

export interface YorkDone {
  readonly ok: true
  readonly slope: number
  readonly intercept: number
  /** As York et al. give them, not scaled by χ². */
  readonly slopeSeUnscaled: number
  readonly interceptSeUnscaled: number
  /** Scaled by max(1, √χ²red). */
  readonly slopeSe: number
  readonly interceptSe: number
  readonly covariance: number
  readonly slopeInterval: readonly [number, number] | null
  readonly interceptInterval: readonly [number, number] | null
  readonly dof: number
  /** As of the plain line: n − 2 where χ²red exceeds 1, otherwise those of the errors given; null = unlimited. */
  readonly intervalDof: number | null
  readonly level: number
  /** Σ Wᵢ·(yᵢ − a − b·xᵢ)². */
  readonly chi2: number
  readonly reducedChi2: number | null
  readonly chi2P: number | null
  readonly iterations: number
}

export interface YorkRefused {
  readonly ok: false
  readonly reason: 'lengthMismatch' | 'notFinite' | 'badSigma' | 'tooFewPoints' | 'equalX' | 'notConverged'
  readonly message: string
}

interface Turn {
  readonly slope: number
  readonly meanX: number
  readonly meanY: number
  readonly weights: readonly number[]
  /** Adjusted x, about the weighted mean. */
  readonly beta: readonly number[]
}

const TURNS = 200
/** Relative change of the slope below which it has settled; the last digits may swing between doubles. */
const SETTLED = 1e-13

/**
 * Straight line through points whose x and y both have errors of their own.
 * @returns the line, its errors and χ²; a refusal where the points do not make one or the slope does not settle
 * @source York, Evensen, López Martínez & De Basabe Delgado, Am. J. Phys. 72, 367 (2004), equations 13
 */
export function fitYork(data: YorkData, { level = 0.95 }: { level?: number } = {}): YorkDone | YorkRefused {
  const refusal = refuseYork(data)
  if (refusal) return refusal
  let slope = plainSlope(data)
  let iterations = 0
  for (;;) {
    const turn = improve(data, slope)
    iterations++
    if (!Number.isFinite(turn.slope)) return { ok: false, reason: 'notConverged', message: 'The slope ran away: the errors given leave no line.' }
    const isSettled = Math.abs(turn.slope - slope) <= SETTLED * Math.abs(turn.slope)
    if (isSettled) return report(data, improve(data, turn.slope), level, iterations)
    if (iterations >= TURNS) return { ok: false, reason: 'notConverged', message: `The slope did not settle in ${TURNS} turns.` }
    slope = turn.slope
  }
}

function refuseYork({ x, y, xSigma, ySigma, correlation }: YorkData): YorkRefused | null {
  const n = x.length
  const lists = [y, xSigma, ySigma, ...(correlation ? [correlation] : [])]
  if (lists.some(list => list.length !== n)) return { ok: false, reason: 'lengthMismatch', message: 'The lists have different lengths.' }
  const bad = x.findIndex((_, i) => ![x[i], y[i]].every(Number.isFinite))
  if (bad >= 0) return { ok: false, reason: 'notFinite', message: `Point ${bad + 1} is not a pair of numbers.` }
  const badSigma = x.findIndex((_, i) => !(xSigma[i]! >= 0 && ySigma[i]! >= 0 && xSigma[i]! + ySigma[i]! > 0 && xSigma[i]! + ySigma[i]! < Infinity))
  if (badSigma >= 0) return { ok: false, reason: 'badSigma', message: `Point ${badSigma + 1} has no usable error.` }
  if (n < 2) return { ok: false, reason: 'tooFewPoints', message: `A line needs two points; ${n} given.` }
  if (x.every(value => value === x[0])) return { ok: false, reason: 'equalX', message: `Every point stands at x = ${x[0]}.` }
  return null
}

function plainSlope({ x, y }: YorkData): number {
  const meanX = x.reduce((sum, v) => sum + v, 0) / x.length
  const meanY = y.reduce((sum, v) => sum + v, 0) / y.length
  return x.reduce((sum, v, i) => sum + (v - meanX) * (y[i]! - meanY), 0) / x.reduce((sum, v) => sum + (v - meanX) ** 2, 0)
}

/** One turn of York's equations: weights for the present slope, then the slope they give. Written in variances, so that an error of zero is allowed. */
function improve({ x, y, xSigma, ySigma, correlation }: YorkData, slope: number): Turn {
  const cross = x.map((_, i) => (correlation?.[i] ?? 0) * xSigma[i]! * ySigma[i]!)
  const weights = x.map((_, i) => 1 / (ySigma[i]! ** 2 + slope * slope * xSigma[i]! ** 2 - 2 * slope * cross[i]!))
  const total = weights.reduce((sum, w) => sum + w, 0)
  const meanX = x.reduce((sum, v, i) => sum + weights[i]! * v, 0) / total
  const meanY = y.reduce((sum, v, i) => sum + weights[i]! * v, 0) / total
  const beta = x.map((v, i) => {
    const u = v - meanX
    const w = y[i]! - meanY
    return weights[i]! * (u * ySigma[i]! ** 2 + slope * w * xSigma[i]! ** 2 - (slope * u + w) * cross[i]!)
  })
  const above = beta.reduce((sum, b, i) => sum + weights[i]! * b * (y[i]! - meanY), 0)
  const below = beta.reduce((sum, b, i) => sum + weights[i]! * b * (x[i]! - meanX), 0)
  return { slope: above / below, meanX, meanY, weights, beta }
}

function report({ x, y, sigmaDof = null }: YorkData, { slope, meanX, meanY, weights, beta }: Turn, level: number, iterations: number): YorkDone {
  const n = x.length
  const intercept = meanY - slope * meanX
  const total = weights.reduce((sum, w) => sum + w, 0)
  const meanBeta = beta.reduce((sum, b, i) => sum + weights[i]! * b, 0) / total
  const spread = beta.reduce((sum, b, i) => sum + weights[i]! * (b - meanBeta) ** 2, 0)
  // Mean of the adjusted x: the point about which slope and intercept are uncorrelated.
  const centre = meanX + meanBeta
  const slopeVariance = 1 / spread
  const interceptVariance = 1 / total + centre * centre * slopeVariance
  const chi2 = x.reduce((sum, v, i) => sum + weights[i]! * (y[i]! - intercept - slope * v) ** 2, 0)
  const dof = n - 2
  const factor = dof > 0 ? Math.max(1, chi2 / dof) : 1
  const slopeSe = Math.sqrt(factor * slopeVariance)
  const interceptSe = Math.sqrt(factor * interceptVariance)
  const intervalDof = chi2 <= dof ? sigmaDof : dof
  const half = dof > 0 ? studentFactor(level, intervalDof) : null
  const around = (value: number, se: number) => half === null ? null : [value - half * se, value + half * se] as const
  return {
    ok: true, slope, intercept, slopeSeUnscaled: Math.sqrt(slopeVariance), interceptSeUnscaled: Math.sqrt(interceptVariance), slopeSe, interceptSe,
    covariance: -factor * centre * slopeVariance, slopeInterval: around(slope, slopeSe), interceptInterval: around(intercept, interceptSe), dof, intervalDof, level, chi2,
    reducedChi2: dof > 0 ? chi2 / dof : null, chi2P: dof > 0 ? chi2UpperP(chi2, dof) : null, iterations,
  }
}

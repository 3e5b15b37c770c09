import { exactLog } from '../exactMath'
import { studentFactor } from '../least-squares/line'
import type { LeastSquaresProblem, Solution } from '../least-squares/problem'
import { solve } from '../least-squares/trustRegion'
import type { WithError } from './asymmetry'
import { dotProduct } from './dotProduct'
import { lorentzianProblem, projectedLorentzian, type LorentzianData } from './lorentzianModel'
import { normalInformation } from './normalInformation'
import { refuseExchange, type ExchangeRefusal } from './refusal'

/** A pool to fit: where it starts and how far it may go. Overlapping pools are not determined without bounds. */
export interface PoolStart {
  readonly name: string
  readonly offset_ppm: number
  readonly offsetRange_ppm: readonly [number, number]
  readonly width_ppm: number
  readonly widthRange_ppm: readonly [number, number]
  /** Least and largest depth, in fractions of S0. */
  readonly depthRange: readonly [number, number]
}

export interface BoundedValue extends WithError { readonly atBound: boolean, readonly interval: readonly [number, number] | null }
export interface FittedPool { readonly name: string, readonly depth: BoundedValue, readonly width_ppm: BoundedValue, readonly offset_ppm: BoundedValue }

export interface LorentzianFit {
  readonly ok: true
  readonly pools: readonly FittedPool[]
  /** Null where it was held at 1. */
  readonly baseline: BoundedValue | null
  readonly fitted: readonly number[]
  readonly residuals: readonly number[]
  /** Unweighted. */
  readonly rss: number
  readonly dof: number
  /** Null where the points had no errors. */
  readonly reducedChi2: number | null
  /** Akaike's criterion with the small-sample term, σ² counted as a parameter; null with too few points. */
  readonly aicc: number | null
  /** Of the column-scaled Jacobian; null where it is rank-deficient: then no errors are stated. */
  readonly condition: number | null
  /** Why the numbers are hardly determined by the data; null where they are. */
  readonly conditionWarning: string | null
  readonly evaluations: number
  readonly converged: boolean
  readonly level: number
}

const LEVEL = 0.95
const BASELINE_RANGE = [0.5, 1.2] as const
/** Columns this far from independent leave two digits of every error to the rounding of the model itself. */
const CONDITION_LIMIT = 100
const CORRELATION_LIMIT = 0.99

export interface LorentzianOptions { readonly baseline: 'fitted' | 'one' }
export interface PooledSpectrum { readonly offset_ppm: readonly number[], readonly z: readonly number[], readonly zSe: readonly number[] | null }

/**
 * Fits Lorentzian pools to a spectrum: depths and baseline by variable projection, then all parameters together within their bounds, with errors from the
 * covariance at the end. Parameters at a bound have no error.
 */
export function fitLorentzians(spectrum: PooledSpectrum, pools: readonly PoolStart[], { baseline }: LorentzianOptions): LorentzianFit | ExchangeRefusal {
  const hasBaseline = baseline === 'fitted'
  const m = 3 * pools.length + (hasBaseline ? 1 : 0)
  const refusal = refuseLorentzian(spectrum, pools, m)
  if (refusal) return refusal
  const data: LorentzianData = { offset_ppm: spectrum.offset_ppm, z: spectrum.z, weights: spectrum.zSe && spectrum.zSe.map(se => 1 / se) }
  const edges = (side: 0 | 1) => Float64Array.from([...(hasBaseline ? [BASELINE_RANGE[side]] : []), ...pools.flatMap(one => [one.depthRange[side], one.widthRange_ppm[side], one.offsetRange_ppm[side]])])
  const problem = lorentzianProblem(data, hasBaseline, { lower: edges(0), upper: edges(1) })
  const reduced = solveProjected(data, pools, hasBaseline)
  const solution = wholeOf(problem, reduced, hasBaseline) ?? solveWhole(problem, [reduced.start, reduced.first()], hasBaseline)
  if (!solution.converged) return refuseExchange('noMinimum', `The ${pools.length} pools did not settle (${solution.stop}).`, 'Fewer pools, or narrower bounds.')
  return describeLorentzian(spectrum, pools, { solution, hasBaseline })
}

function refuseLorentzian({ offset_ppm, z, zSe }: PooledSpectrum, pools: readonly PoolStart[], m: number): ExchangeRefusal | null {
  if (z.length !== offset_ppm.length || (zSe && zSe.length !== z.length)) return refuseExchange('lengthMismatch', 'Offsets, Z and their errors differ in number.', 'One Z and one error for each offset.')
  const bad = z.findIndex((value, i) => !Number.isFinite(value) || !Number.isFinite(offset_ppm[i]) || (zSe !== null && !(zSe[i]! > 0)))
  if (bad >= 0) return refuseExchange('notFinite', `Point ${bad + 1} is not a pair of numbers with an error above zero.`, 'Finite numbers, errors above zero.')
  if (pools.length < 1 || pools.length > 6) return refuseExchange('badCount', `${pools.length} pools.`, 'One to six pools.')
  const wrong = pools.find(one => [one.offsetRange_ppm, one.widthRange_ppm, one.depthRange].some(([low, high]) => !(low < high)) || !(one.widthRange_ppm[0] > 0))
  if (wrong) return refuseExchange('badBounds', `The bounds of ${wrong.name} leave no room, or allow a width of zero.`, 'A lower bound below the upper one, widths above zero.')
  if (z.length < m + 1) return refuseExchange('tooFewPoints', `${z.length} points for ${m} parameters.`, `${m + 1} offsets or more, or fewer pools.`)
  const [low, high] = [Math.min(...offset_ppm), Math.max(...offset_ppm)]
  const outside = pools.find(one => one.offset_ppm < low || one.offset_ppm > high)
  return outside ? refuseExchange('poolOutside', `${outside.name} at ${outside.offset_ppm} ppm lies outside the spectrum (${low} to ${high} ppm).`, 'Offsets that reach beyond the pool.') : null
}

interface Reduced {
  readonly solution: Solution
  /** All parameters of the whole problem where it ended, and those at the widths and places it began with. */
  readonly start: Float64Array
  readonly first: () => Float64Array
}

/** Widths and places from the projected problem, with the depths and the baseline that belong to them. */
function solveProjected(data: LorentzianData, pools: readonly PoolStart[], hasBaseline: boolean): Reduced {
  const side = (s: 0 | 1) => Float64Array.from(pools.flatMap(one => [one.widthRange_ppm[s], one.offsetRange_ppm[s]]))
  const projected = projectedLorentzian(data, hasBaseline, { lower: side(0), upper: side(1) })
  const first = pools.flatMap(one => [one.width_ppm, one.offset_ppm])
  const solution = solve(projected.problem, first, { polishSteps: 1, reductionTolerance: 1e-5, maxEvaluations: 60 })
  const offset = hasBaseline ? 1 : 0
  const wholeAt = (nonlinear: Float64Array) => {
    const linear = projected.linearAt(nonlinear)
    return Float64Array.from([...(hasBaseline ? [linear[0]!] : []), ...pools.flatMap((_, c) => [linear[offset + c]!, nonlinear[2 * c]!, nonlinear[2 * c + 1]!])])
  }
  return { solution, start: wholeAt(solution.parameters), first: () => wholeAt(Float64Array.from(first)) }
}

/**
 * The whole problem within its bounds, where the projection leaves them: from the end of the projection and from its beginning, depths and baseline first brought to their
 * best inside the bounds. Pools that cancel one another would otherwise be cut off far from any minimum.
 */
function solveWhole(problem: LeastSquaresProblem, starts: readonly Float64Array[], hasBaseline: boolean): Solution {
  const [first, ...others] = starts.map(start => solve(problem, boundedStart(problem, start, hasBaseline), { polishSteps: 4 })) as [Solution, ...Solution[]]
  const value = (one: Solution) => one.converged ? one.sumOfSquares : Infinity
  return others.reduce((best, one) => value(one) < value(best) ? one : best, first)
}

/** Depths and baseline by least squares within their bounds, one after the other until they rest; widths and places stay. */
function boundedStart(problem: LeastSquaresProblem, start: Float64Array, hasBaseline: boolean): Float64Array {
  const { n, lower, upper } = problem
  const first = hasBaseline ? 1 : 0
  const inside = (value: number, j: number) => Number.isFinite(value) ? Math.min(Math.max(value, lower[j]!), upper[j]!) : (lower[j]! + upper[j]!) / 2
  const p = start.map(inside)
  const linear = Array.from(p, (_, j) => j).filter(j => j < first || (j - first) % 3 === 0)
  const residual = new Float64Array(n)
  const jacobian = new Float64Array(n * problem.m)
  problem.evaluate(p, residual, jacobian)
  for (let turn = 0; turn < 200; turn++) {
    for (const j of linear) {
      const square = dotProduct(jacobian, j * n, jacobian, j * n, n)
      const wanted = inside(p[j]! - dotProduct(jacobian, j * n, residual, 0, n) / square, j)
      for (let i = 0; i < n; i++) residual[i] = residual[i]! + (wanted - p[j]!) * jacobian[j * n + i]!
      p[j] = wanted
    }
  }
  return p
}

/** The projected minimum as that of the whole problem, which it is where every depth and the baseline lie inside their bounds; null where one does not, or none was found. */
function wholeOf(problem: LeastSquaresProblem, { solution, start }: Reduced, hasBaseline: boolean): Solution | null {
  const isInside = start.every((value, j) => value >= problem.lower[j]! && value <= problem.upper[j]!)
  if (!solution.converged || !isInside) return null
  const residual = new Float64Array(problem.n)
  const jacobian = new Float64Array(problem.n * problem.m)
  problem.evaluate(start, residual, jacobian)
  const first = hasBaseline ? 1 : 0
  const atBound = Array.from(start, (_, j) => j >= first && (j - first) % 3 > 0 && solution.atBound[2 * Math.floor((j - first) / 3) + ((j - first) % 3) - 1]!)
  return { ...solution, parameters: start, residual, jacobian, atBound }
}

function describeLorentzian(spectrum: PooledSpectrum, pools: readonly PoolStart[], { solution, hasBaseline }: { solution: Solution, hasBaseline: boolean }): LorentzianFit {
  const n = spectrum.z.length
  const { parameters: p, atBound, sumOfSquares: sum } = solution
  const dof = n - p.length
  const isKnown = spectrum.zSe !== null
  const variance = isKnown ? Math.max(1, sum / dof) : sum / dof
  // a pool of depth 0 has neither width nor place
  const held = atBound.map((isHeld, j) => isHeld || solution.jacobian.subarray(j * n, (j + 1) * n).every(entry => entry === 0))
  const { inverse, condition } = normalInformation(solution.jacobian, n, held)
  const factor = studentFactor(LEVEL, isKnown && sum <= dof ? null : dof)
  const valueOf = (j: number): BoundedValue => {
    const se = inverse === null || held[j] ? null : Math.sqrt(inverse[j * p.length + j]! * variance)
    return { value: p[j]!, se, atBound: atBound[j]!, interval: se === null ? null : [p[j]! - factor * se, p[j]! + factor * se] }
  }
  const first = hasBaseline ? 1 : 0
  const residuals = spectrum.z.map((_, i) => -solution.residual[i]! * (spectrum.zSe?.[i] ?? 1))
  const rss = residuals.reduce((total, one) => total + one * one, 0)
  const k = p.length + 1
  return {
    ok: true, rss, dof, condition, evaluations: solution.evaluations, converged: solution.converged, level: LEVEL, residuals,
    pools: pools.map(({ name }, c) => ({ name, depth: valueOf(first + 3 * c), width_ppm: valueOf(first + 3 * c + 1), offset_ppm: valueOf(first + 3 * c + 2) })),
    baseline: hasBaseline ? valueOf(0) : null, fitted: spectrum.z.map((z, i) => z - residuals[i]!), reducedChi2: isKnown ? sum / dof : null,
    aicc: n - k - 1 > 0 && sum > 0 ? n * exactLog(sum / n) + 2 * k + (2 * k * (k + 1)) / (n - k - 1) : null,
    conditionWarning: warnOf({ inverse, condition, m: p.length }, [...(hasBaseline ? ['the baseline'] : []), ...pools.flatMap(one => [`the depth of ${one.name}`, `the width of ${one.name}`, `the place of ${one.name}`])]),
  }
}

function warnOf({ inverse, condition, m }: { inverse: Float64Array | null, condition: number | null, m: number }, names: readonly string[]): string | null {
  if (inverse === null || condition === null) return 'The data do not determine all parameters: two pools do the work of one. Leave a pool out or hold its place.'
  let worst = { size: 0, a: 0, b: 0 }
  for (let a = 0; a < m; a++) {
    for (let b = 0; b < a; b++) {
      const size = Math.abs(inverse[a * m + b]!) / Math.sqrt(inverse[a * m + a]! * inverse[b * m + b]!)
      if (size > worst.size) worst = { size, a: b, b: a }
    }
  }
  if (condition <= CONDITION_LIMIT && worst.size <= CORRELATION_LIMIT) return null
  return `The data hardly tell ${names[worst.a]} from ${names[worst.b]} (correlation ${worst.size.toFixed(3)}, condition number ${condition.toPrecision(2)}): hold one of them, or use fewer pools.`
}

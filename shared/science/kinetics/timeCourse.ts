/**
 * First-order time courses of any signal: y = y_inf + (y_0 − y_inf)·e^(−kt), y_inf free or known, by variable projection over ln k.
 * @source textbook kinetics; interval of k from ln k, as a rate constant is positive
 */
import { fUpperP, tQuantile } from '../statistics'
import { runsP } from '../relaxometry/runsTest'
import { halfLifeOf, type RateValue } from './firstOrder'
import { refuseKinetics, solveWeighted, type KineticsRefusal } from './weightedLinear'

export interface TimePoint { readonly time_s: number, readonly signal: number, readonly sigma: number | null }
export interface TimeCourseOptions {
  /** Signal after complete reaction; null to fit it. */
  readonly end: number | null
  /** Signal at time zero; needed, with the end, for the initial-rate form. */
  readonly start: number | null
}
export type TimeCourseFlag = 'initialRate' | 'runs' | 'secondExponential' | 'endExtrapolated'
export interface TimeCourse {
  readonly ok: true
  readonly form: 'exponential' | 'initialRate'
  readonly rate_per_s: RateValue
  readonly halfLife_s: RateValue
  readonly start: number
  readonly end: number
  readonly residuals: readonly number[]
  readonly chi2: number
  readonly dof: number
  readonly pRuns: number | null
  readonly pSecondExponential: number | null
  readonly flags: readonly TimeCourseFlag[]
  /** The end was fitted with the rate. */
  readonly freeEnd: boolean
  /** Signal at time zero by the straight line of an initial rate; null for an exponential. */
  readonly intercept: number | null
  /** Sums of squares that the search for the rate looked at. */
  readonly evaluations: number
}

/** Below this share reacted the curve is a straight line to the data. */
export const INITIAL_RATE_FRAC = 0.1

/** Counts referred to one instant: activity × 2^((t − t_ref)/t_half), errors alike. A physical half-life must be above zero. */
export function correctDecay(points: readonly TimePoint[], halfLife_s: number, reference_s: number): readonly TimePoint[] | KineticsRefusal {
  if (!(halfLife_s > 0 && Number.isFinite(halfLife_s))) return refuseKinetics('badHalfLife', `The half-life of the nuclide is ${halfLife_s} s.`, 'A physical half-life above 0 s.')
  return points.map(p => {
    const factor = 2 ** ((p.time_s - reference_s) / halfLife_s)
    return { time_s: p.time_s, signal: p.signal * factor, sigma: p.sigma === null ? null : p.sigma * factor }
  })
}

interface Data { readonly t: number[], readonly y: number[], readonly sigma: number[], readonly known: boolean }

/** Fits one course. A course that does not move towards its end within the noise is refused. */
export function fitTimeCourse(points: readonly TimePoint[], options: TimeCourseOptions): TimeCourse | KineticsRefusal {
  const bad = points.findIndex(p => !(Number.isFinite(p.time_s) && p.time_s >= 0 && Number.isFinite(p.signal) && (p.sigma === null || p.sigma > 0)))
  if (bad >= 0) return refuseKinetics('badPoint', `Point ${bad + 1} has no usable time, signal or error.`, 'Times of 0 s or more, finite signals, errors above zero or none.')
  const known = points.every(p => p.sigma !== null)
  if (!known && points.some(p => p.sigma !== null)) return refuseKinetics('mixedErrors', 'Some points have an error and some have none.', 'An error for every point, or for none.')
  const needed = options.end === null ? 5 : 4
  if (new Set(points.map(p => p.time_s)).size < needed) return refuseKinetics('tooFewPoints', `${new Set(points.map(p => p.time_s)).size} different times.`, `At least ${needed} different times.`)
  const data = { t: points.map(p => p.time_s), y: points.map(p => p.signal), sigma: points.map(p => p.sigma ?? 1), known }
  const { start, end } = options
  if (start !== null && end !== null) {
    if (start === end) return refuseKinetics('noSpan', 'Start and end are the same signal.', 'A start that differs from the end.')
    if (Math.max(...data.y.map(v => (v - start) / (end - start))) < INITIAL_RATE_FRAC) return initialRate(data, start, end)
  }
  return exponential(data, end)
}

const varianceOf = (data: Data, chi2: number, dof: number): number => (data.known ? Math.max(1, chi2 / dof) : chi2 / dof)

function rateOf(rate: number, se: number, dof: number): RateValue {
  const half = tQuantile(0.975, dof) * se / rate
  return { value: rate, kind: '=', se, interval: [rate * Math.exp(-half), rate * Math.exp(half)] }
}

const still = (what: string): KineticsRefusal => refuseKinetics('doesNotDecay', `The course does not decay: ${what}.`, 'A course that moves towards its end by more than its noise, or a longer one; a stated start and end where little has reacted.')

function initialRate(data: Data, start: number, end: number): TimeCourse | KineticsRefusal {
  const line = solveWeighted([data.t.map(() => 1), data.t], data.y, data.sigma)
  if (!line) return still('all points lie at one time')
  const dof = data.t.length - 2
  const rate = line.values[1]! / (end - start)
  const se = Math.sqrt(varianceOf(data, line.chi2, dof) * line.covariance[1]![1]!) / Math.abs(end - start)
  if (!(rate > tQuantile(0.95, dof) * se)) return still('its initial slope cannot be told from zero')
  const value = rateOf(rate, se, dof)
  const residuals = data.y.map((v, i) => v - line.values[0]! - line.values[1]! * data.t[i]!)
  return { ok: true, form: 'initialRate', rate_per_s: value, halfLife_s: halfLifeOf(value), start, end, residuals, chi2: line.chi2, dof, pRuns: null, pSecondExponential: null, flags: ['initialRate'], freeEnd: false, intercept: line.values[0]!, evaluations: 1 }
}

const target = (data: Data, end: number | null): number[] => (end === null ? data.y : data.y.map(v => v - end))
const columnsAt = (data: Data, end: number | null, ...rates: number[]): number[][] =>
  [...(end === null ? [data.t.map(() => 1)] : []), ...rates.map(k => data.t.map(t => Math.exp(-k * t)))]
const chi2At = (data: Data, end: number | null, ...rates: number[]): number => solveWeighted(columnsAt(data, end, ...rates), target(data, end), data.sigma)?.chi2 ?? Infinity

/** Rates from a thousandth of one reaction over the course to fifty over its first interval, evenly in ln k. */
function rateGrid(data: Data, count: number): number[] {
  const last = Math.max(...data.t)
  const first = Math.min(...data.t.filter(t => t > 0))
  const low = Math.log(1e-3 / last)
  const high = Math.log(20 / first)
  return Array.from({ length: count }, (_, i) => Math.exp(low + (high - low) * i / (count - 1)))
}

const GRID = 160
const GOLDEN_STEPS = 60

function bestRate(data: Data, end: number | null): number | null {
  const grid = rateGrid(data, GRID)
  const chi2 = grid.map(k => chi2At(data, end, k))
  const at = chi2.indexOf(Math.min(...chi2))
  if (at <= 0 || at === grid.length - 1) return null
  let [low, high] = [Math.log(grid[at - 1]!), Math.log(grid[at + 1]!)]
  const golden = (Math.sqrt(5) - 1) / 2
  for (let i = 0; i < GOLDEN_STEPS; i++) {
    const [a, b] = [high - golden * (high - low), low + golden * (high - low)]
    if (chi2At(data, end, Math.exp(a)) < chi2At(data, end, Math.exp(b))) high = b
    else low = a
  }
  return Math.exp((low + high) / 2)
}

function exponential(data: Data, known: number | null): TimeCourse | KineticsRefusal {
  const rate = bestRate(data, known)
  const linear = rate === null ? null : solveWeighted(columnsAt(data, known, rate), target(data, known), data.sigma)
  if (rate === null || !linear) return still('no rate within reach of its times fits better than its neighbours')
  const amplitude = linear.values.at(-1)!
  const end = known ?? linear.values[0]!
  const jacobian = [...columnsAt(data, known, rate), data.t.map(t => -amplitude * t * Math.exp(-rate * t))]
  const dof = data.t.length - jacobian.length
  const full = solveWeighted(jacobian, target(data, known), data.sigma)
  if (!full || dof < 1) return still('amplitude and rate cannot be told apart')
  const flat = solveWeighted([data.t.map(() => 1)], data.y, data.sigma)!
  const variance = varianceOf(data, linear.chi2, dof)
  // amplitude and rate against a constant; a known end has one parameter in common with it
  const added = jacobian.length - 1
  if (variance > 0 && fUpperP(Math.max(0, flat.chi2 - linear.chi2) / added / variance, added, dof) > 0.05) return still('a constant describes it as well (F test, 5 %)')
  const value = rateOf(rate, Math.sqrt(variance * full.covariance.at(-1)!.at(-1)!), dof)
  const residuals = data.y.map((v, i) => v - end - amplitude * Math.exp(-rate * data.t[i]!))
  const order = data.t.map((_, i) => i).sort((a, b) => data.t[a]! - data.t[b]!)
  const pRuns = runsP(order.map(i => residuals[i]!))
  const pSecondExponential = secondExponentialP(data, known, linear.chi2)
  const flags: TimeCourseFlag[] = []
  if (pRuns !== null && pRuns < 0.05) flags.push('runs')
  if (pSecondExponential !== null && pSecondExponential < 0.01) flags.push('secondExponential')
  if (known === null && rate * Math.max(...data.t) < 2) flags.push('endExtrapolated')
  return { ok: true, form: 'exponential', rate_per_s: value, halfLife_s: halfLifeOf(value), start: end + amplitude, end, residuals, chi2: linear.chi2, dof, pRuns, pSecondExponential, flags, freeEnd: known === null, intercept: null, evaluations: GRID + 2 * GOLDEN_STEPS }
}

/** p of two exponentials against one by the F test, the pair of rates from a grid; null with fewer than three degrees of freedom left. */
function secondExponentialP(data: Data, end: number | null, single: number): number | null {
  const dof = data.t.length - (end === null ? 5 : 4)
  if (dof < 3) return null
  const grid = rateGrid(data, 24)
  let best = single
  grid.forEach((slow, i) => grid.slice(i + 1).forEach(fast => { best = Math.min(best, chi2At(data, end, slow, fast)) }))
  return best > 0 ? fUpperP((single - best) / 2 / (best / dof), 2, dof) : null
}

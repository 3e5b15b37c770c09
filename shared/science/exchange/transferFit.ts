import { exactExp, exactLog } from '../exactMath'
import { informationOf } from '../least-squares/covariance'
import { studentFactor } from '../least-squares/line'
import type { LeastSquaresProblem } from '../least-squares/problem'
import { solve } from '../least-squares/trustRegion'
import type { WithError } from './asymmetry'
import { refuseExchange, type ExchangeRefusal } from './refusal'
import { transferAt, type TransferForm, type TransferSettings } from './transferForms'

/** One reading of saturation transfer: PTR or MTR_Rex, as the form says. */
export interface TransferPoint { readonly b1_uT: number, readonly tsat_s: number, readonly value: number, readonly se: number | null }

export interface TransferSetup {
  readonly form: TransferForm
  /** Longitudinal relaxation of water in the tube; null = not known, possible at steady state only: then x/R1w is found in place of x. */
  readonly r1w_per_s: WithError | null
  readonly r2s_per_s: number
  readonly start: number
  /** Fraction of protons where the concentration is known; null = fitted. */
  readonly x: WithError | null
  /** Relative standard error of the scale of B1, which all points share. */
  readonly b1RelativeSe: number
}

export interface TransferFit {
  readonly ok: true
  readonly form: TransferForm
  /** Exchange rate, with every source of error named in `sources`. */
  readonly k_per_s: WithError & { readonly interval: readonly [number, number] | null }
  /** Fraction of protons: given or fitted; null where only x/R1w is found. */
  readonly x: WithError | null
  /** x/R1w in seconds, where R1w is not known. */
  readonly xOverR1w_s: WithError | null
  /** Standard error of k by source. */
  readonly sources: readonly { readonly name: 'noise' | 'r1w' | 'x' | 'b1', readonly se_per_s: number }[]
  /** Correlation of k with the fitted fraction; null where it is not fitted. */
  readonly correlation: number | null
  /** Other exchange rates that fit as well, within the same interval of the sum of squares. */
  readonly alternatives_per_s: readonly number[]
  readonly fitted: readonly number[]
  readonly residuals: readonly number[]
  readonly dof: number
  readonly reducedChi2: number | null
  readonly atBound: boolean
  readonly level: number
}

const LEVEL = 0.95
/** Limits of k, s⁻¹, and of x (or x/R1w). */
const K_RANGE = [0.1, 1e6] as const
const X_RANGE = [1e-9, 10] as const
const STARTS = 16

/**
 * Exchange rate from readings over B1 (QUESP), over saturation time (QUEST, the fraction of protons known), or both at once, on the exact forms of `transferAt`.
 * Starts are a grid of rates: none is asked of a person. Errors of R1w, of the fraction and of the scale of B1 are carried by fitting anew with each moved by its error.
 */
export function fitTransfer(points: readonly TransferPoint[], setup: TransferSetup): TransferFit | ExchangeRefusal {
  const refusal = refuseTransfer(points, setup)
  if (refusal) return refusal
  const best = minima(points, setup)
  const found = best[0]
  if (!found) return refuseExchange('noMinimum', 'No exchange rate explains the readings: the search did not settle.', 'Readings that rise with B1 or with the saturation time.')
  return describeFit(points, setup, [found, ...best.slice(1)])
}

function refuseTransfer(points: readonly TransferPoint[], { form, r1w_per_s, x, start, r2s_per_s, b1RelativeSe }: TransferSetup): ExchangeRefusal | null {
  const bad = points.findIndex(p => !(Number.isFinite(p.value) && p.b1_uT > 0 && p.b1_uT < Infinity && p.tsat_s > 0 && (p.se === null || (p.se > 0 && p.se < Infinity))))
  if (bad >= 0) return refuseExchange('badPoint', `Reading ${bad + 1} (B1 ${points[bad]!.b1_uT} µT, saturation ${points[bad]!.tsat_s} s) is no number, has no B1, no time or no error above zero.`, 'B1 and saturation time above zero, errors above zero for all readings or for none.')
  if (points.some(p => p.se === null) && points.some(p => p.se !== null)) return refuseExchange('mixedErrors', 'Some readings have an error and some have none.', 'An error for every reading, or for none.')
  if (r1w_per_s === null && form === 'buildUp') return refuseExchange('noR1w', 'The build-up needs the relaxation rate of water, R1w.', 'R1w typed, or measured on the same tubes.')
  if (r1w_per_s !== null && !(r1w_per_s.value > 0)) return refuseExchange('badR1w', `R1w is ${r1w_per_s.value} s⁻¹.`, 'R1w above zero.')
  if (r1w_per_s === null && x !== null) return refuseExchange('noR1w', 'A known fraction of protons needs R1w beside it.', 'R1w, or the fraction fitted.')
  if (x !== null && !(x.value > 0 && x.value < 1)) return refuseExchange('badFraction', `The fraction of exchanging protons is ${x.value}.`, 'A concentration and a number of protons above zero.')
  if (!(start >= 0 && start <= 1) || !(r2s_per_s >= 0) || !(b1RelativeSe >= 0 && b1RelativeSe < 1)) return refuseExchange('badSetting', 'Start magnetisation, R2 of the pool or error of B1 out of range.', 'Start from 0 to 1, R2 of 0 or more, error of B1 from 0 to below 1.')
  const b1s = new Set(points.map(p => p.b1_uT)).size
  if (x === null && b1s < 2) return refuseExchange('oneB1', 'One B1 gives x·k·α only: it cannot tell the exchange rate from the number of protons.', 'Two B1 or more, or the concentration and the number of exchanging protons.')
  const free = x === null ? 2 : 1
  const conditions = new Set(points.map(p => `${p.b1_uT}|${form === 'buildUp' ? p.tsat_s : 0}`)).size
  if (conditions < free || points.length < free + (points[0]?.se === null ? 1 : 0)) return refuseExchange('tooFewPoints', `${points.length} readings at ${conditions} conditions for ${free} unknown${free > 1 ? 's' : ''}.`, 'More B1 or more saturation times than unknowns.')
  if (!points.some(p => p.value > 0)) return refuseExchange('noTransfer', 'No reading shows transfer: the pool is not seen at this offset.', 'The offset of the pool, stronger saturation or a higher concentration.')
  return null
}

interface Minimum { readonly p: readonly number[], readonly sum: number, readonly jacobian: Float64Array, readonly residual: Float64Array, readonly atBound: readonly boolean[] }

/** Predicted reading for ln k and ln x; without R1w, x stands for x/R1w. */
function predict(setup: TransferSetup, point: TransferPoint, logK: number, logX: number): number {
  const settings: TransferSettings = { r1w_per_s: setup.r1w_per_s?.value ?? 1, r2s_per_s: setup.r2s_per_s, start: setup.start }
  return transferAt(setup.form, { k_per_s: exactExp(logK), x: exactExp(logX), b1_uT: point.b1_uT, tsat_s: point.tsat_s }, settings)
}

/** Different minima, lowest first. */
function minima(points: readonly TransferPoint[], setup: TransferSetup): Minimum[] {
  const n = points.length
  const m = setup.x === null ? 2 : 1
  const logs = (range: readonly [number, number]) => range.map(exactLog) as [number, number]
  const [kLow, kHigh] = logs(K_RANGE)
  const [xLow, xHigh] = logs(X_RANGE)
  const fixed = setup.x === null ? null : exactLog(setup.x.value)
  const STEP = 1e-5
  const problem: LeastSquaresProblem = {
    n, m, lower: Float64Array.of(...[kLow, xLow].slice(0, m)), upper: Float64Array.of(...[kHigh, xHigh].slice(0, m)),
    evaluate(p, residual, jacobian) {
      const logX = fixed ?? p[1]!
      points.forEach((point, i) => {
        const w = 1 / (point.se ?? 1)
        residual[i] = w * (predict(setup, point, p[0]!, logX) - point.value)
        // central differences in logarithms: the forms are smooth, and 1e-5 leaves ten digits
        jacobian[i] = (w * (predict(setup, point, p[0]! + STEP, logX) - predict(setup, point, p[0]! - STEP, logX))) / (2 * STEP)
        if (m === 2) jacobian[n + i] = (w * (predict(setup, point, p[0]!, logX + STEP) - predict(setup, point, p[0]!, logX - STEP))) / (2 * STEP)
      })
    },
  }
  const found: Minimum[] = []
  for (let s = 0; s < STARTS; s++) {
    const logK = exactLog(3) + (s / (STARTS - 1)) * (exactLog(2e5) - exactLog(3))
    const start = m === 1 ? [logK] : [logK, matchMean(points, setup, logK, [xLow, xHigh])]
    const solution = solve(problem, start)
    if (!solution.converged) continue
    const p = Array.from(solution.parameters)
    if (found.some(other => Math.abs(other.p[0]! - p[0]!) < 1e-3)) continue
    found.push({ p, sum: solution.sumOfSquares, jacobian: solution.jacobian, residual: solution.residual, atBound: solution.atBound })
  }
  return found.sort((a, b) => (a.sum - b.sum) || (a.p[0]! - b.p[0]!))
}

/** ln x at which the mean prediction is the mean reading: every form rises with x. */
function matchMean(points: readonly TransferPoint[], setup: TransferSetup, logK: number, range: readonly [number, number]): number {
  let [low, high] = range
  const wanted = points.reduce((sum, point) => sum + point.value, 0)
  for (let turn = 0; turn < 30; turn++) {
    const middle = (low + high) / 2
    if (points.reduce((sum, point) => sum + predict(setup, point, logK, middle), 0) < wanted) low = middle
    else high = middle
  }
  return (low + high) / 2
}

/** Variance factor of a fit: χ² per degree of freedom, never below 1 where errors were given; null where nothing says it. */
function varianceOf(points: readonly TransferPoint[], sum: number, dof: number): number | null {
  if (points[0]!.se !== null) return dof > 0 ? Math.max(1, sum / dof) : 1
  return dof > 0 ? sum / dof : null
}

function describeFit(points: readonly TransferPoint[], setup: TransferSetup, [best, ...others]: [Minimum, ...Minimum[]]): TransferFit {
  const m = best.p.length
  const dof = points.length - m
  const variance = varianceOf(points, best.sum, dof)
  const { inverse } = informationOf(best.jacobian, points.length, best.atBound)
  const atBound = best.atBound.some(Boolean)
  const noise = inverse === null || variance === null || atBound ? null : inverse.map(entry => entry * variance)
  const k = exactExp(best.p[0]!)
  const moved = outsideSources(points, setup, best.p)
  const known = points[0]!.se !== null
  const factor = dof > 0 && noise ? studentFactor(LEVEL, known && best.sum <= dof ? null : dof) : known && noise ? studentFactor(LEVEL, null) : null
  const seLogK = noise && Math.hypot(Math.sqrt(noise[0]!), ...moved.map(one => one.logK))
  const seLogX = noise && m === 2 ? Math.hypot(Math.sqrt(noise[3]!), ...moved.map(one => one.logX)) : null
  const fraction = m === 2 ? { value: exactExp(best.p[1]!), se: seLogX === null ? null : exactExp(best.p[1]!) * seLogX } : setup.x!
  const close = best.sum + (variance ?? 1) * studentFactor(LEVEL, null) ** 2
  const scaled = (i: number) => best.residual[i]! * (points[i]!.se ?? 1)
  return {
    ok: true, form: setup.form, dof, level: LEVEL, atBound,
    k_per_s: { value: k, se: seLogK && k * seLogK, interval: seLogK && factor ? [k * exactExp(-factor * seLogK), k * exactExp(factor * seLogK)] : null },
    x: setup.r1w_per_s === null ? null : fraction, xOverR1w_s: setup.r1w_per_s === null ? fraction : null,
    sources: noise === null ? [] : [{ name: 'noise' as const, se_per_s: k * Math.sqrt(noise[0]!) }, ...moved.map(one => ({ name: one.name, se_per_s: k * Math.abs(one.logK) }))],
    correlation: noise && m === 2 ? noise[1]! / Math.sqrt(noise[0]! * noise[3]!) : null,
    alternatives_per_s: others.filter(one => one.sum <= close * (1 + 1e-9) && !one.atBound.some(Boolean)).map(one => exactExp(one.p[0]!)),
    fitted: points.map((point, i) => point.value + scaled(i)), residuals: points.map((_, i) => -scaled(i)),
    reducedChi2: known && dof > 0 ? best.sum / dof : null,
  }
}

/** Change of ln k and ln x when a known quantity moves by its standard error, the minimum followed. */
function outsideSources(points: readonly TransferPoint[], setup: TransferSetup, at: readonly number[]): { name: 'r1w' | 'x' | 'b1', logK: number, logX: number }[] {
  const refit = (changed: TransferSetup, scale = 1): readonly number[] => {
    const all = minima(points.map(point => ({ ...point, b1_uT: point.b1_uT * scale })), changed)
    // the minimum that continues the one found, not one that another branch offers
    return all.reduce<readonly number[]>((near, one) => Math.abs(one.p[0]! - at[0]!) < Math.abs(near[0]! - at[0]!) ? one.p : near, all[0]?.p ?? at)
  }
  const difference = (name: 'r1w' | 'x' | 'b1', up: readonly number[], down: readonly number[]) => ({ name, logK: (up[0]! - down[0]!) / 2, logX: ((up[1] ?? 0) - (down[1] ?? 0)) / 2 })
  const shifted = (given: WithError, sign: 1 | -1): WithError => ({ value: given.value + sign * given.se!, se: null })
  const { r1w_per_s: r1w, x, b1RelativeSe } = setup
  return [
    ...(r1w?.se ? [difference('r1w', refit({ ...setup, r1w_per_s: shifted(r1w, 1) }), refit({ ...setup, r1w_per_s: shifted(r1w, -1) }))] : []),
    ...(x?.se ? [difference('x', refit({ ...setup, x: shifted(x, 1) }), refit({ ...setup, x: shifted(x, -1) }))] : []),
    ...(b1RelativeSe > 0 ? [difference('b1', refit(setup, 1 + b1RelativeSe), refit(setup, 1 - b1RelativeSe))] : []),
  ]
}

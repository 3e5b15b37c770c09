/**
 * Challenges: percent intact against time, pH or ligand ratio, by maximum likelihood with censored points kept ("less than 2 %" adds the probability of lying below 2 %).
 * Time: 100·e^(−kt). pH and ratio: 100/(1 + e^(−n(u − u_50))), u = pH or ln(ratio), n of either sign.
 * @source J. Tobin, Econometrica 26, 24 (1958), from memory, for the likelihood of a censored value
 */
import { normalCdf } from '../statistics'
import type { RateValue } from './firstOrder'
import { refuseKinetics, type KineticsRefusal } from './weightedLinear'

export interface ChallengePoint { readonly x: number, readonly intact_percent: number, readonly kind: '=' | '<' | '>', readonly se_percent: number }
export type ChallengeAxis = 'time_s' | 'pH' | 'ratio'
export interface ChallengeFit { readonly ok: true, readonly axis: ChallengeAxis, readonly quantity: 'rate_per_s' | 'midpoint', readonly value: RateValue, readonly slope: number | null }

const Z_95_ONE_SIDED = 1.6448536269514722
const Z_95 = 1.959963984540054

function cost(points: readonly ChallengePoint[], curve: (x: number) => number): number {
  return points.reduce((sum, p) => {
    const z = (p.intact_percent - curve(p.x)) / p.se_percent
    // below 1e-300 the logarithm would be infinite: the search only needs to know that such a curve is hopeless
    return sum + (p.kind === '=' ? z * z / 2 : -Math.log(Math.max(1e-300, normalCdf(p.kind === '<' ? z : -z))))
  }, 0)
}

/** Fits a rate (time) or a midpoint (pH, ratio). A midpoint outside the measured range is a bound at its edge, never extrapolated. */
export function fitChallenge(points: readonly ChallengePoint[], axis: ChallengeAxis): ChallengeFit | KineticsRefusal {
  const lowest = axis === 'ratio' ? Number.MIN_VALUE : 0
  const bad = points.findIndex(p => !(Number.isFinite(p.x) && p.x >= lowest && (axis !== 'pH' || p.x <= 14) && Number.isFinite(p.intact_percent) && p.se_percent > 0))
  if (bad >= 0) return refuseKinetics('badPoint', `Point ${bad + 1} lies outside its axis or has no error.`, 'Times of 0 or more, pH from 0 to 14, ratios above zero; each percentage with its error.')
  if (new Set(points.map(p => p.x)).size < 3) return refuseKinetics('tooFewPoints', 'Fewer than three different conditions.', 'Percent intact at three conditions or more.')
  return axis === 'time_s' ? fitTime(points) : fitMidpoint(points, axis)
}

function minimise(f: (u: number) => number, from: number, to: number): number {
  let [low, high] = [from, to]
  for (let level = 0; level < 14; level++) {
    const grid = Array.from({ length: 41 }, (_, i) => low + (high - low) * i / 40)
    const values = grid.map(f)
    const at = values.indexOf(Math.min(...values))
    low = grid[Math.max(0, at - 1)]!
    high = grid[Math.min(40, at + 1)]!
  }
  return (low + high) / 2
}

/** Where a cost has risen by `rise` above its least value, by bisection between the minimum and `far`; null where it does not rise so far. */
function riseAt(f: (u: number) => number, least: number, far: number, rise: number): number | null {
  const limit = f(least) + rise
  if (!(f(far) > limit)) return null
  let [inside, outside] = [least, far]
  for (let i = 0; i < 60; i++) {
    const middle = (inside + outside) / 2
    if (f(middle) > limit) outside = middle
    else inside = middle
  }
  return outside
}

function fitTime(points: readonly ChallengePoint[]): ChallengeFit | KineticsRefusal {
  const last = Math.max(...points.map(p => p.x))
  const first = Math.min(...points.filter(p => p.x > 0).map(p => p.x))
  const at = (logRate: number): number => cost(points, t => 100 * Math.exp(-Math.exp(logRate) * t))
  const [low, high] = [Math.log(1e-6 / last), Math.log(50 / first)]
  const best = minimise(at, low, high)
  const two = [riseAt(at, best, low, Z_95 ** 2 / 2), riseAt(at, best, high, Z_95 ** 2 / 2)] as const
  const bound = (kind: '<' | '>', value: number): ChallengeFit => ({ ok: true, axis: 'time_s', quantity: 'rate_per_s', slope: null, value: { value: Math.exp(value), kind, se: null, interval: null } })
  const [below, above] = [riseAt(at, best, low, Z_95_ONE_SIDED ** 2 / 2), riseAt(at, best, high, Z_95_ONE_SIDED ** 2 / 2)]
  if (two[0] === null && above !== null) return bound('<', above)
  if (two[1] === null && below !== null) return bound('>', below)
  if (two[0] === null || two[1] === null) return refuseKinetics('undetermined', 'The points say nothing about the rate.', 'Percentages with errors well below 100 %.')
  const rate = Math.exp(best)
  return { ok: true, axis: 'time_s', quantity: 'rate_per_s', slope: null, value: { value: rate, kind: '=', se: rate * (two[1] - two[0]) / 2 / Z_95, interval: [Math.exp(two[0]), Math.exp(two[1])] } }
}

const steepnesses = [-1, 1].flatMap(sign => Array.from({ length: 45 }, (_, i) => sign * 0.2 * 1.12 ** i))

function fitMidpoint(points: readonly ChallengePoint[], axis: 'pH' | 'ratio'): ChallengeFit | KineticsRefusal {
  const moved = points.map(p => ({ ...p, x: axis === 'ratio' ? Math.log(p.x) : p.x }))
  const back = (u: number): number => (axis === 'ratio' ? Math.exp(u) : u)
  const [low, high] = [Math.min(...moved.map(p => p.x)), Math.max(...moved.map(p => p.x))]
  const with_ = (u: number, n: number): number => cost(moved, x => 100 / (1 + Math.exp(-n * (x - u))))
  const profile = (u: number): number => Math.min(...steepnesses.map(n => with_(u, n)))
  const flat = minimise(level => cost(moved, () => level), 0, 100)
  if (cost(moved, () => flat) - profile(minimise(profile, low, high)) < 2) return onOneSide(moved, axis, flat)
  const best = minimise(profile, low, high)
  const slope = steepnesses.reduce((a, b) => (with_(best, b) < with_(best, a) ? b : a))
  const [below, above] = [riseAt(profile, best, low - 1, Z_95 ** 2 / 2), riseAt(profile, best, high + 1, Z_95 ** 2 / 2)]
  const value = back(best)
  const edge = (high - low) * 1e-6
  if (best - low < edge || high - best < edge) return { ok: true, axis, quantity: 'midpoint', slope, value: { value, kind: high - best < edge ? '>' : '<', se: null, interval: null } }
  if (below === null || above === null) return refuseKinetics('undetermined', 'The midpoint has no interval inside these points.', 'Points on both sides of half intact.')
  const se = (above - below) / 2 / Z_95 * (axis === 'ratio' ? value : 1)
  return { ok: true, axis, quantity: 'midpoint', slope, value: { value, kind: '=', se, interval: [back(below), back(above)] } }
}

/** Percentages that do not change over the range: the direction of the change, and so the side of the midpoint, is not known from them. */
function onOneSide(points: readonly ChallengePoint[], axis: ChallengeAxis, level: number): KineticsRefusal {
  return refuseKinetics('noChange', `The percentage does not change over the ${points.length} points (about ${level.toFixed(0)} %).`, `A wider range of ${axis === 'pH' ? 'pH' : 'ratio'}, or the points as a record of their own.`)
}

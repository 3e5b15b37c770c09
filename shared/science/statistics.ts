import { betaTails, gammaTails } from './specialFunctions'

/**
 * Distribution functions and quantiles, to about 12 significant digits.
 * Out-of-domain arguments give NaN. Degrees of freedom need not be whole numbers; +∞ is allowed for Student's t.
 */

/** P(Z ≤ z) of the standard normal distribution. */
export function normalCdf(z: number): number {
  if (Number.isNaN(z)) return NaN
  const { lower, upper } = gammaTails(0.5, (z * z) / 2)
  return z < 0 ? 0.5 * upper : 0.5 + 0.5 * lower
}

/** z with P(Z ≤ z) = p. @param p in [0, 1] */
export function normalQuantile(p: number): number {
  if (!(p >= 0 && p <= 1)) return NaN
  if (p === 0.5) return 0
  const tail = Math.min(p, 1 - p)
  if (tail === 0) return p === 0 ? -Infinity : Infinity
  const z = invertUpperTail(tail, x => 0.5 * gammaTails(0.5, (x * x) / 2).upper, x => Math.exp((-x * x) / 2) / Math.sqrt(2 * Math.PI))
  return p < 0.5 ? -z : z
}

/** P(T ≤ t) of Student's distribution. @param dof > 0 */
export function tCdf(t: number, dof: number): number {
  if (Number.isNaN(t) || !(dof > 0)) return NaN
  const upper = tUpperTail(Math.abs(t), dof)
  return t < 0 ? upper : 1 - upper
}

/** P(|T| ≥ |t|), kept accurate where it is tiny. */
export function tTwoSidedP(t: number, dof: number): number {
  if (Number.isNaN(t) || !(dof > 0)) return NaN
  return Math.min(1, 2 * tUpperTail(Math.abs(t), dof))
}

const knownT = new Map<string, number>()
const KNOWN_LIMIT = 4096

/** t with P(T ≤ t) = p. Every fit asks for the same few, so found ones are kept. @param p in [0, 1] @param dof > 0 */
export function tQuantile(p: number, dof: number): number {
  const key = `${p}/${dof}`
  const known = knownT.get(key)
  if (known !== undefined) return known
  const found = findTQuantile(p, dof)
  if (knownT.size >= KNOWN_LIMIT) knownT.clear()
  knownT.set(key, found)
  return found
}

function findTQuantile(p: number, dof: number): number {
  if (!(p >= 0 && p <= 1) || !(dof > 0)) return NaN
  if (dof === Infinity) return normalQuantile(p)
  if (p === 0.5) return 0
  const tail = Math.min(p, 1 - p)
  if (tail === 0) return p === 0 ? -Infinity : Infinity
  const t = invertUpperTail(tail, x => tUpperTail(x, dof), x => tDensity(x, dof))
  return p < 0.5 ? -t : t
}

/** P(F ≤ f). @param f ≥ 0 @param dof1 numerator, > 0 @param dof2 denominator, > 0 */
export function fCdf(f: number, dof1: number, dof2: number): number {
  if (!(f >= 0) || !(dof1 > 0) || !(dof2 > 0)) return NaN
  return betaTails(dof1 / 2, dof2 / 2, dof1 * f, dof2).lower
}

/** P(F ≥ f), kept accurate where it is tiny. */
export function fUpperP(f: number, dof1: number, dof2: number): number {
  if (!(f >= 0) || !(dof1 > 0) || !(dof2 > 0)) return NaN
  return betaTails(dof1 / 2, dof2 / 2, dof1 * f, dof2).upper
}

/** P(X ≤ x) of χ². @param x ≥ 0 @param dof > 0 */
export function chi2Cdf(x: number, dof: number): number {
  if (!(x >= 0) || !(dof > 0)) return NaN
  return gammaTails(dof / 2, x / 2).lower
}

/** P(X ≥ x) of χ², kept accurate where it is tiny. */
export function chi2UpperP(x: number, dof: number): number {
  if (!(x >= 0) || !(dof > 0)) return NaN
  return gammaTails(dof / 2, x / 2).upper
}

/** x with P(X ≤ x) = p of χ². @param p in [0, 1] @param dof > 0 */
export function chi2Quantile(p: number, dof: number): number {
  if (!(p >= 0 && p <= 1) || !(dof > 0)) return NaN
  if (p === 0) return 0
  if (p === 1) return Infinity
  // The smaller tail carries the digits.
  const difference = p < 0.5
    ? (x: number) => gammaTails(dof / 2, x / 2).lower / p - 1
    : (x: number) => 1 - gammaTails(dof / 2, x / 2).upper / (1 - p)
  return findIncreasingRoot(difference, dof)
}

/**
 * Weighted mean of the values and its standard error by inverse variances.
 * @returns NaN for no value
 */
export function inverseVarianceMean(values: readonly number[], se: readonly number[]): { mean: number, se: number, chi2: number } {
  const weights = se.map(s => 1 / (s * s))
  const total = weights.reduce((sum, w) => sum + w, 0)
  const mean = values.reduce((sum, v, i) => sum + weights[i]! * v, 0) / total
  const chi2 = values.reduce((sum, v, i) => sum + weights[i]! * (v - mean) ** 2, 0)
  return { mean, se: 1 / Math.sqrt(total), chi2 }
}

function tUpperTail(t: number, dof: number): number {
  if (t === 0) return 0.5
  if (t === Infinity) return 0
  if (dof === Infinity) return 0.5 * gammaTails(0.5, (t * t) / 2).upper
  return 0.5 * betaTails(0.5, dof / 2, t * t, dof).upper
}

function tDensity(t: number, dof: number): number {
  // d/dt of the regularised incomplete beta function, by its own prefactor: no gamma function of large arguments.
  return betaTails(0.5, dof / 2, t * t, dof).density / t
}

/**
 * x > 0 where a falling upper tail equals the given one, by Newton steps on its logarithm inside a bracket.
 */
function invertUpperTail(tail: number, upper: (x: number) => number, density: (x: number) => number): number {
  let low = 0
  let high = 1
  while (upper(high) > tail) {
    low = high
    high *= 2
    if (high > 1e300) return Infinity
  }
  let x = 0.5 * (low + high)
  for (let turn = 0; turn < 200; turn++) {
    const value = upper(x)
    if (value > tail) low = x
    else high = x
    let next = x + (value * Math.log(value / tail)) / density(x)
    if (!(next > low && next < high)) next = 0.5 * (low + high)
    if (Math.abs(next - x) <= 1e-15 * next) return next
    x = next
  }
  return x
}

/** Root of an increasing function on (0, ∞) by bracketing and Illinois steps. */
function findIncreasingRoot(difference: (x: number) => number, start: number): number {
  let low = start
  let high = start
  while (difference(low) > 0) low /= 2
  while (difference(high) < 0) high *= 2
  let atLow = difference(low)
  let atHigh = difference(high)
  for (let turn = 0; turn < 400 && high - low > 1e-15 * high; turn++) {
    if (atLow === 0) return low
    if (atHigh === 0) return high
    let x = (low * atHigh - high * atLow) / (atHigh - atLow)
    // Every third step halves the bracket, so that a bent function cannot pin one end.
    if (turn % 3 === 2 || !(x > low && x < high)) x = 0.5 * (low + high)
    const value = difference(x)
    if (value < 0) {
      low = x
      atLow = value
      atHigh /= 2
    } else {
      high = x
      atHigh = value
      atLow /= 2
    }
  }
  return 0.5 * (low + high)
}

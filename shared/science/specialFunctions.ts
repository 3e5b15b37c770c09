/**
 * Incomplete gamma and beta functions with both tails, each computed where it is small, so that neither loses digits.
 * Their common prefactors are written with the deviance and the error of Stirling's formula, which keeps relative accuracy for large arguments.
 * @source Loader, Fast and accurate computation of binomial probabilities (2000); Lentz's continued fractions as in Thompson & Barnett, J. Comput. Phys. 64, 490 (1986)
 */
const HALF_LOG_TWO_PI = 0.9189385332046728
const EPSILON = 2 ** -53
const TINY = 1e-300

/** ln Γ(x) for x > 0, by Stirling's series above 16 and the recurrence below. @source Abramowitz & Stegun 6.1.40 and 6.1.15 */
export function logGamma(x: number): number {
  if (!(x > 0)) return NaN
  if (x >= 16) return (x - 0.5) * Math.log(x) - x + HALF_LOG_TWO_PI + stirlingSeries(x)
  // Upward recurrence to where Stirling's series holds to the last digit.
  let product = 1
  let shifted = x
  while (shifted < 16) {
    product *= shifted
    shifted += 1
  }
  return (shifted - 0.5) * Math.log(shifted) - shifted + HALF_LOG_TWO_PI + stirlingSeries(shifted) - Math.log(product)
}

/** ln Γ(x + 1) − [(x + ½)·ln x − x + ½·ln 2π]: what Stirling's formula leaves out. */
function stirlingError(x: number): number {
  if (x >= 16) return stirlingSeries(x)
  if (x === 0) return NaN
  return logGamma(x + 1) - (x + 0.5) * Math.log(x) + x - HALF_LOG_TWO_PI
}

function stirlingSeries(x: number): number {
  const y = 1 / (x * x)
  return (1 / 12 - y * (1 / 360 - y * (1 / 1260 - y * (1 / 1680 - y * (1 / 1188 - y * (691 / 360360 - y / 156)))))) / x
}

/** x·ln(x/m) + m − x, without the cancellation near x = m. */
function deviance(x: number, m: number): number {
  if (Math.abs(x - m) >= 0.1 * (x + m)) return x * Math.log(x / m) + m - x
  const v = (x - m) / (x + m)
  let sum = (x - m) * v
  let term = 2 * x * v
  const square = v * v
  for (let j = 1; j < 1000; j++) {
    term *= square
    const next = sum + term / (2 * j + 1)
    if (next === sum) return next
    sum = next
  }
  return sum
}

/**
 * Regularised incomplete gamma function: P(a, x) = lower, Q(a, x) = upper.
 * @param a > 0 @param x ≥ 0
 */
export function gammaTails(a: number, x: number): { lower: number, upper: number } {
  if (!(a > 0) || !(x >= 0)) return { lower: NaN, upper: NaN }
  if (x === 0) return { lower: 0, upper: 1 }
  if (x === Infinity) return { lower: 1, upper: 0 }
  // x^a e^−x / Γ(a + 1)
  const front = Math.exp(-stirlingError(a) - deviance(a, x)) / Math.sqrt(2 * Math.PI * a)
  if (x < a + 1) {
    let term = 1
    let sum = 1
    for (let n = 1; n < 100_000 && term > EPSILON * sum; n++) {
      term *= x / (a + n)
      sum += term
    }
    return { lower: front * sum, upper: 1 - front * sum }
  }
  const upper = front * a * gammaFraction(a, x)
  return { lower: 1 - upper, upper }
}

function gammaFraction(a: number, x: number): number {
  let b = x + 1 - a
  let c = 1 / TINY
  let d = 1 / b
  let h = d
  for (let i = 1; i < 100_000; i++) {
    const an = -i * (i - a)
    b += 2
    d = 1 / nonZero(an * d + b)
    c = nonZero(b + an / c)
    const change = d * c
    h *= change
    if (Math.abs(change - 1) <= 2 * EPSILON) break
  }
  return h
}

/**
 * Regularised incomplete beta function I_x(a, b) = lower and 1 − I_x = upper at x = u/(u + v), given by u and v so that neither x nor 1 − x is rounded.
 * `density` is x·(1 − x)·dI/dx.
 * @param a > 0 @param b > 0 @param u ≥ 0 @param v ≥ 0
 */
export function betaTails(a: number, b: number, u: number, v: number): { lower: number, upper: number, density: number } {
  if (!(a > 0) || !(b > 0) || !(u >= 0) || !(v >= 0)) return { lower: NaN, upper: NaN, density: NaN }
  const x = u === Infinity ? 1 : u / (u + v)
  const y = u === Infinity ? 0 : v / (u + v)
  if (x === 0) return { lower: 0, upper: 1, density: 0 }
  if (y === 0) return { lower: 1, upper: 0, density: 0 }
  const n = a + b
  // x^a (1 − x)^b / B(a, b)
  const density = Math.sqrt((a * b) / (2 * Math.PI * n))
    * Math.exp(stirlingError(n) - stirlingError(a) - stirlingError(b) - deviance(a, n * x) - deviance(b, n * y))
  if (x < (a + 1) / (n + 2)) {
    const lower = (density / a) * betaFraction(a, b, x)
    return { lower, upper: 1 - lower, density }
  }
  const upper = (density / b) * betaFraction(b, a, y)
  return { lower: 1 - upper, upper, density }
}

function betaFraction(a: number, b: number, x: number): number {
  let c = 1
  let d = 1 / nonZero(1 - ((a + b) * x) / (a + 1))
  let h = d
  for (let m = 1; m < 100_000; m++) {
    const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m))
    d = 1 / nonZero(1 + even * d)
    c = nonZero(1 + even / c)
    h *= d * c
    const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1))
    d = 1 / nonZero(1 + odd * d)
    c = nonZero(1 + odd / c)
    h *= d * c
    if (Math.abs(d * c - 1) <= 2 * EPSILON) break
  }
  return h
}

function nonZero(x: number): number {
  return Math.abs(x) < TINY ? TINY : x
}

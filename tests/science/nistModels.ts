/** Model functions of the certified problems: value at x, and the derivatives written to g. */
export type Curve = (x: number, p: ArrayLike<number>, g: Float64Array) => number

const exponentialRise: Curve = (x, p, g) => {
  const e = Math.exp(-p[1]! * x)
  g[0] = 1 - e
  g[1] = p[0]! * x * e
  return p[0]! * (1 - e)
}

const threeExponentials: Curve = (x, p, g) => {
  let sum = 0
  for (let j = 0; j < 6; j += 2) {
    const e = Math.exp(-p[j + 1]! * x)
    g[j] = e
    g[j + 1] = -p[j]! * x * e
    sum += p[j]! * e
  }
  return sum
}

const twoPeaksOnDecay: Curve = (x, p, g) => {
  const e = Math.exp(-p[1]! * x)
  g[0] = e
  g[1] = -p[0]! * x * e
  let sum = p[0]! * e
  for (const j of [2, 5]) {
    const u = (x - p[j + 1]!) / p[j + 2]!
    const peak = Math.exp(-u * u)
    g[j] = peak
    g[j + 1] = (2 * p[j]! * peak * u) / p[j + 2]!
    g[j + 2] = (2 * p[j]! * peak * u * u) / p[j + 2]!
    sum += p[j]! * peak
  }
  return sum
}

/** Ratio of polynomials with `above` coefficients above and the rest, from the first power on, below 1 + … */
const rational = (above: number): Curve => (x, p, g) => {
  let numerator = 0
  for (let j = above - 1; j >= 0; j--) numerator = numerator * x + p[j]!
  let denominator = 0
  for (let j = p.length - 1; j >= above; j--) denominator = (denominator + p[j]!) * x
  denominator += 1
  const value = numerator / denominator
  for (let j = 0; j < above; j++) g[j] = x ** j / denominator
  for (let j = above; j < p.length; j++) g[j] = (-value * x ** (j - above + 1)) / denominator
  return value
}

export const NIST_CURVES: Readonly<Record<string, Curve>> = {
  Misra1a: exponentialRise,
  BoxBOD: exponentialRise,
  Misra1b: (x, p, g) => {
    const s = 1 + (p[1]! * x) / 2
    g[0] = 1 - 1 / (s * s)
    g[1] = (p[0]! * x) / (s * s * s)
    return p[0]! * g[0]
  },
  Misra1d: (x, p, g) => {
    const s = 1 + p[1]! * x
    g[0] = (p[1]! * x) / s
    g[1] = (p[0]! * x) / (s * s)
    return p[0]! * g[0]
  },
  Chwirut2: (x, p, g) => {
    const s = p[1]! + p[2]! * x
    const value = Math.exp(-p[0]! * x) / s
    g[0] = -x * value
    g[1] = -value / s
    g[2] = (-x * value) / s
    return value
  },
  Lanczos1: threeExponentials,
  Lanczos3: threeExponentials,
  Gauss1: twoPeaksOnDecay,
  Gauss2: twoPeaksOnDecay,
  DanWood: (x, p, g) => {
    g[0] = x ** p[1]!
    g[1] = p[0]! * g[0] * Math.log(x)
    return p[0]! * g[0]
  },
  Kirby2: rational(3),
  Thurber: rational(4),
  Rat42: (x, p, g) => {
    const e = Math.exp(p[1]! - p[2]! * x)
    const s = 1 + e
    g[0] = 1 / s
    g[1] = (-p[0]! * e) / (s * s)
    g[2] = (p[0]! * x * e) / (s * s)
    return p[0]! / s
  },
  MGH10: (x, p, g) => {
    const s = x + p[2]!
    g[0] = Math.exp(p[1]! / s)
    g[1] = (p[0]! * g[0]) / s
    g[2] = (-p[0]! * p[1]! * g[0]) / (s * s)
    return p[0]! * g[0]
  },
  Eckerle4: (x, p, g) => {
    const u = (x - p[2]!) / p[1]!
    const e = Math.exp((-u * u) / 2)
    const value = (p[0]! / p[1]!) * e
    g[0] = e / p[1]!
    g[1] = (value * (u * u - 1)) / p[1]!
    g[2] = (value * u) / p[1]!
    return value
  },
}

/**
 * Monotone piecewise-cubic interpolation: cubic Hermite pieces whose slopes are weighted harmonic means of the neighbouring chords, so that no piece overshoots its
 * points and a dip gets no ripple beside it.
 * @source Fritsch & Butland, SIAM J. Sci. Stat. Comput. 5, 300 (1984); Fritsch & Carlson, SIAM J. Numer. Anal. 17, 238 (1980)
 */
export interface Pchip {
  /** Value at x; NaN outside the points: nothing is extrapolated. */
  at: (x: number) => number
  /** Slope at x; NaN outside the points. */
  slopeAt: (x: number) => number
  /** ∫ from a to b, exact for the pieces; NaN where an end lies outside the points. Negative for b < a. */
  integral: (a: number, b: number) => number
}

/**
 * @param x strictly ascending, at least 2
 * @param y one value for each x
 * @throws Error for fewer than two points, unequal lengths or an x that does not rise: the caller sorts and merges first
 */
export function createPchip(x: ArrayLike<number>, y: ArrayLike<number>): Pchip {
  const n = x.length
  if (n < 2 || y.length !== n) throw new Error(`Interpolation needs two points or more, a value for each; ${n} and ${y.length} given.`)
  for (let i = 1; i < n; i++) if (!(x[i]! > x[i - 1]!)) throw new Error(`Interpolation needs rising abscissae: ${x[i - 1]} is followed by ${x[i]}.`)
  const slopes = pchipSlopes(x, y)
  const piece = (at: number): number => {
    if (!(at >= x[0]! && at <= x[n - 1]!)) return -1
    let [low, high] = [0, n - 1]
    while (high - low > 1) {
      const middle = (low + high) >> 1
      if (x[middle]! <= at) low = middle
      else high = middle
    }
    return low
  }
  const cubic = (k: number) => {
    const h = x[k + 1]! - x[k]!
    const chord = (y[k + 1]! - y[k]!) / h
    return { c1: slopes[k]!, c2: (3 * chord - 2 * slopes[k]! - slopes[k + 1]!) / h, c3: (slopes[k]! + slopes[k + 1]! - 2 * chord) / (h * h) }
  }
  const primitive = (k: number, t: number): number => {
    const { c1, c2, c3 } = cubic(k)
    return t * (y[k]! + t * (c1 / 2 + t * (c2 / 3 + (t * c3) / 4)))
  }
  return {
    at(at) {
      const k = piece(at)
      if (k < 0) return NaN
      const t = at - x[k]!
      const { c1, c2, c3 } = cubic(k)
      return y[k]! + t * (c1 + t * (c2 + t * c3))
    },
    slopeAt(at) {
      const k = piece(at)
      if (k < 0) return NaN
      const t = at - x[k]!
      const { c1, c2, c3 } = cubic(k)
      return c1 + t * (2 * c2 + 3 * t * c3)
    },
    integral(a, b) {
      const [first, last] = [piece(Math.min(a, b)), piece(Math.max(a, b))]
      if (first < 0 || last < 0) return NaN
      let sum = primitive(last, Math.max(a, b) - x[last]!) - primitive(first, Math.min(a, b) - x[first]!)
      for (let k = first; k < last; k++) sum += primitive(k, x[k + 1]! - x[k]!)
      return b < a ? -sum : sum
    },
  }
}

function pchipSlopes(x: ArrayLike<number>, y: ArrayLike<number>): Float64Array {
  const n = x.length
  const slopes = new Float64Array(n)
  const h = (k: number) => x[k + 1]! - x[k]!
  const chord = (k: number) => (y[k + 1]! - y[k]!) / h(k)
  if (n === 2) return slopes.fill(chord(0))
  for (let k = 1; k < n - 1; k++) {
    const [before, after] = [chord(k - 1), chord(k)]
    if (!(before * after > 0)) continue
    const w1 = 2 * h(k) + h(k - 1)
    const w2 = h(k) + 2 * h(k - 1)
    slopes[k] = (w1 + w2) / (w1 / before + w2 / after)
  }
  slopes[0] = endSlope(h(0), h(1), chord(0), chord(1))
  slopes[n - 1] = endSlope(h(n - 2), h(n - 3), chord(n - 2), chord(n - 3))
  return slopes
}

/** Three-point slope at an end, held so that the last piece keeps the shape of its points. */
function endSlope(h0: number, h1: number, chord0: number, chord1: number): number {
  const slope = ((2 * h0 + h1) * chord0 - h0 * chord1) / (h0 + h1)
  if (!(slope * chord0 > 0)) return 0
  return chord0 * chord1 <= 0 && Math.abs(slope) > 3 * Math.abs(chord0) ? 3 * chord0 : slope
}

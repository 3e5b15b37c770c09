/** Orthonormal bases on a logarithmic grid of τ, by column one after the other, and what leads back from them to the coefficients. */
export interface ProjectionGrid {
  readonly n: number
  readonly k: number
  /** Points on the grid. */
  readonly count: number
  /** The bases one after the other, n·k numbers each. */
  readonly bases: Float64Array
  /** R of each basis by row. */
  readonly triangles: readonly Float64Array[]
  readonly logTaus: readonly number[]
  /** First column that differs between points of the grid: those before it hold the same of y everywhere. */
  readonly firstVarying: number
}

/** First column that differs between points of the grid. */
export function firstVaryingColumn({ n, k, count, bases }: Pick<ProjectionGrid, 'n' | 'k' | 'count' | 'bases'>): number {
  for (let c = 0; c < k; c++) {
    for (let g = 1; g < count; g++) {
      for (let i = 0; i < n; i++) if (bases[(g * k + c) * n + i] !== bases[c * n + i]) return c
    }
  }
  return k
}

/** Product of y with the column that begins at `at`, in four sums: one sum would wait for itself at every term. */
function productWith(q: Float64Array, at: number, y: Float64Array, n: number): number {
  const whole = n - (n % 4)
  let s0 = 0, s1 = 0, s2 = 0, s3 = 0
  for (let i = 0; i < whole; i += 4) {
    s0 += q[at + i]! * y[i]!
    s1 += q[at + i + 1]! * y[i + 1]!
    s2 += q[at + i + 2]! * y[i + 2]!
    s3 += q[at + i + 3]! * y[i + 3]!
  }
  for (let i = whole; i < n; i++) s0 += q[at + i]! * y[i]!
  return (s0 + s1) + (s2 + s3)
}

/** Sum of squares of y that the varying columns of one grid point hold. */
function heldBy({ n, k, bases, firstVarying }: ProjectionGrid, g: number, y: Float64Array): number {
  let held = 0
  for (let c = firstVarying; c < k; c++) {
    const product = productWith(bases, (g * k + c) * n, y, n)
    held += product * product
  }
  return held
}

/** Grid point whose basis holds most of y: the one that leaves least. Every point is tried. */
export function mostAligned(all: ProjectionGrid, y: Float64Array): number {
  let best = 0
  let most = -1
  for (let g = 0; g < all.count; g++) {
    const held = heldBy(all, g, y)
    if (held > most) {
      most = held
      best = g
    }
  }
  return best
}

/** Strides of the search: the first tries the whole grid, the others both sides of the best so far. Valleys of sums of exponentials are wider than twelve points. */
const STRIDES = [12, 6, 3, 2, 1] as const

function bestOfGrid(all: ProjectionGrid, y: Float64Array): number {
  let best = 0
  let most = -1
  for (let g = 0; g < all.count; g += STRIDES[0]) {
    const held = heldBy(all, g, y)
    if (held > most) {
      most = held
      best = g
    }
  }
  for (let s = 1; s < STRIDES.length; s++) {
    const middle = best
    for (let side = -1; side <= 1; side += 2) {
      const g = middle + side * STRIDES[s]!
      if (g < 0 || g >= all.count) continue
      const held = heldBy(all, g, y)
      if (held > most) {
        most = held
        best = g
      }
    }
  }
  return best
}

const REACH = 2
const POINTS = 2 * REACH + 1

/**
 * Reads a start off the grid: the top of the quartic through the best point and two neighbours on either side, and the coefficients interpolated there.
 * At the ends of the grid, the point itself.
 * @returns a function of the weighted signal; its answer is overwritten by the next call
 */
export function seedReader(all: ProjectionGrid): (y: Float64Array) => { readonly tau: number, readonly linear: Float64Array } {
  const { k, count, logTaus } = all
  const held = new Float64Array(POINTS)
  const coefficients = new Float64Array(POINTS * k)
  const share = new Float64Array(POINTS)
  const linear = new Float64Array(k)
  const one = new Float64Array(k)
  return (y) => {
    const best = bestOfGrid(all, y)
    if (best < REACH || best >= count - REACH) {
      coefficientsAt(all, best, y, linear)
      return { tau: Math.exp(logTaus[best]!), linear }
    }
    for (let s = 0; s < POINTS; s++) {
      const g = best + s - REACH
      held[s] = coefficientsAt(all, g, y, one)
      for (let c = 0; c < k; c++) coefficients[s * k + c] = one[c]!
    }
    const top = topOfQuartic(held)
    lagrangeShares(top, share)
    for (let c = 0; c < k; c++) {
      let value = 0
      for (let s = 0; s < POINTS; s++) value += share[s]! * coefficients[s * k + c]!
      linear[c] = value
    }
    return { tau: Math.exp(logTaus[best]! + top * (logTaus[best + 1]! - logTaus[best]!)), linear }
  }
}

/** Coefficients of the basis functions into `linear`; returns the sum of squares that they hold. */
function coefficientsAt({ n, k, bases, triangles }: ProjectionGrid, g: number, y: Float64Array, linear: Float64Array): number {
  const r = triangles[g]!
  let held = 0
  for (let c = k - 1; c >= 0; c--) {
    const product = productWith(bases, (g * k + c) * n, y, n)
    held += product * product
    let sum = product
    for (let d = c + 1; d < k; d++) sum -= r[c * k + d]! * linear[d]!
    linear[c] = r[c * k + c] === 0 ? 0 : sum / r[c * k + c]!
  }
  return held
}

/** Place of the top between −1 and 1 of the quartic through five equally spaced values, the third of which is the largest; 0 where it has none. */
function topOfQuartic(v: Float64Array): number {
  const first = (v[3]! - v[1]!) / 2
  const second = v[3]! - 2 * v[2]! + v[1]!
  const third = (v[4]! - 2 * v[3]! + 2 * v[1]! - v[0]!) / 2
  const fourth = v[4]! - 4 * v[3]! + 6 * v[2]! - 4 * v[1]! + v[0]!
  // Stirling's central differences: slope and bend at t.
  const a1 = first - third / 6
  const a2 = second - fourth / 12
  let t = -first / second
  for (let turn = 0; turn < 3; turn++) {
    const slope = a1 + t * (a2 + t * (third / 2 + t * (fourth / 6)))
    const bend = a2 + t * (third + t * (fourth / 2))
    if (!(bend < 0)) return 0
    t -= slope / bend
  }
  return t > -1 && t < 1 ? t : 0
}

/** Shares of the five values in their interpolation at t, counted in steps from the middle one. */
function lagrangeShares(t: number, share: Float64Array): void {
  const below = t * t - 1
  const beyond = t * t - 4
  share[0] = (t * below * (t - 2)) / 24
  share[1] = (-t * (t - 1) * beyond) / 6
  share[2] = (below * beyond) / 4
  share[3] = (-t * (t + 1) * beyond) / 6
  share[4] = (t * below * (t + 2)) / 24
}

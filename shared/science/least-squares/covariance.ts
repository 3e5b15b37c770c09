/** Inverse information of a solve, without the variance factor. */
export interface Information {
  /** (JᵀJ)⁻¹ over all parameters, by row; rows of held parameters are zero. Null when rank-deficient. */
  readonly inverse: Float64Array | null
  /** Condition number of the free columns scaled to length 1; null when rank-deficient. */
  readonly condition: number | null
  readonly rank: number
  /** Parameters that were free. */
  readonly freeCount: number
  /** Diagonal of the hat matrix, one per residual; null when rank-deficient. */
  readonly leverage: Float64Array | null
}

const EPSILON = 2 ** -52

/**
 * (JᵀJ)⁻¹, condition and leverage of the free columns, from a QR factorisation of the Jacobian with its columns scaled to length 1.
 * @param jacobian column-major, n × m, rows already multiplied by 1/σᵢ
 * @param held parameters without an error of their own
 */
export function informationOf(jacobian: Float64Array, n: number, held: readonly boolean[]): Information {
  const free: number[] = []
  for (let j = 0; j < held.length; j++) if (!held[j]) free.push(j)
  const k = free.length
  const nothing = { inverse: null, condition: null, leverage: null, freeCount: k }
  const lengths = new Float64Array(k)
  const q = new Float64Array(n * k)
  for (let c = 0; c < k; c++) {
    const length = normOf(jacobian, free[c]! * n, n)
    if (k > n || !(length > 0 && length < Infinity)) return { ...nothing, rank: 0 }
    lengths[c] = length
    for (let i = 0; i < n; i++) q[c * n + i] = jacobian[free[c]! * n + i]! / length
  }
  const r = orthogonalise(q, n, k)
  const rank = pivotRank(r, k, n)
  if (rank < k) return { ...nothing, rank }
  const inverseR = invertTriangle(r, k)
  const singular = singularValues(r, k)
  const condition = singular[0]! / singular[k - 1]!
  const leverage = new Float64Array(n)
  for (let c = 0; c < k; c++) {
    for (let i = 0; i < n; i++) leverage[i]! += q[c * n + i]! ** 2
  }
  return { inverse: spread(inverseR, free, lengths, held.length), condition: condition < Infinity ? condition : null, rank, freeCount: k, leverage }
}

function normOf(values: Float64Array, from: number, count: number): number {
  let square = 0
  for (let i = 0; i < count; i++) square += values[from + i]! * values[from + i]!
  return Math.sqrt(square)
}

/** Gram–Schmidt, every column twice, which is as orthogonal as Householder; q becomes Q, R is returned by row. */
function orthogonalise(q: Float64Array, n: number, k: number): Float64Array {
  const r = new Float64Array(k * k)
  for (let c = 0; c < k; c++) {
    const at = c * n
    for (let pass = 0; pass < 2; pass++) {
      for (let b = 0; b < c; b++) {
        let product = 0
        for (let i = 0; i < n; i++) product += q[b * n + i]! * q[at + i]!
        r[b * k + c]! += product
        for (let i = 0; i < n; i++) q[at + i]! -= product * q[b * n + i]!
      }
    }
    const length = normOf(q, at, n)
    r[c * k + c] = length
    if (length > 0) for (let i = 0; i < n; i++) q[at + i]! /= length
  }
  return r
}

/** The columns have length 1, so a pivot is the sine of the angle between a column and those before it. */
function pivotRank(r: Float64Array, k: number, n: number): number {
  for (let c = 0; c < k; c++) {
    if (!(r[c * k + c]! > 8 * EPSILON * Math.sqrt(n))) return c
  }
  return k
}

function invertTriangle(r: Float64Array, k: number): Float64Array {
  const inverse = new Float64Array(k * k)
  for (let c = 0; c < k; c++) {
    for (let i = c; i >= 0; i--) {
      let sum = i === c ? 1 : 0
      for (let l = i + 1; l <= c; l++) sum -= r[i * k + l]! * inverse[l * k + c]!
      inverse[i * k + c] = sum / r[i * k + i]!
    }
  }
  return inverse
}

/** R⁻¹R⁻ᵀ with the column lengths put back, spread over all m parameters. */
function spread(inverseR: Float64Array, free: readonly number[], lengths: Float64Array, m: number): Float64Array {
  const k = free.length
  const inverse = new Float64Array(m * m)
  for (let a = 0; a < k; a++) {
    for (let b = a; b < k; b++) {
      let sum = 0
      for (let l = b; l < k; l++) sum += inverseR[a * k + l]! * inverseR[b * k + l]!
      sum /= lengths[a]! * lengths[b]!
      inverse[free[a]! * m + free[b]!] = sum
      inverse[free[b]! * m + free[a]!] = sum
    }
  }
  return inverse
}

/**
 * Singular values of a k × k matrix, largest first, by one-sided Jacobi rotations: small values keep their relative accuracy.
 * @source Demmel & Veselić, SIAM J. Matrix Anal. Appl. 13, 1204 (1992)
 */
export function singularValues(matrix: Float64Array, k: number): number[] {
  const a = matrix.slice()
  for (let sweep = 0; sweep < 60; sweep++) {
    let isRotated = false
    for (let p = 0; p < k - 1; p++) {
      for (let q = p + 1; q < k; q++) isRotated = rotateRows(a, k, p, q) || isRotated
    }
    if (!isRotated) break
  }
  const lengths: number[] = []
  for (let p = 0; p < k; p++) lengths.push(normOf(a, p * k, k))
  return lengths.sort((x, y) => y - x)
}

/** Makes rows p and q orthogonal; false when they already were. */
function rotateRows(a: Float64Array, k: number, p: number, q: number): boolean {
  let pp = 0
  let qq = 0
  let pq = 0
  for (let i = 0; i < k; i++) {
    pp += a[p * k + i]! ** 2
    qq += a[q * k + i]! ** 2
    pq += a[p * k + i]! * a[q * k + i]!
  }
  if (Math.abs(pq) <= 4 * EPSILON * Math.sqrt(pp * qq)) return false
  const zeta = (qq - pp) / (2 * pq)
  const tangent = (zeta >= 0 ? 1 : -1) / (Math.abs(zeta) + Math.sqrt(1 + zeta * zeta))
  const cosine = 1 / Math.sqrt(1 + tangent * tangent)
  const sine = cosine * tangent
  for (let i = 0; i < k; i++) {
    const x = a[p * k + i]!
    const y = a[q * k + i]!
    a[p * k + i] = cosine * x - sine * y
    a[q * k + i] = sine * x + cosine * y
  }
  return true
}

/** Correlation matrix of a covariance matrix; entries of parameters without a variance are 0, their diagonal 1. */
export function correlationOf(covariance: readonly (readonly number[])[]): number[][] {
  return covariance.map((row, a) => row.map((entry, b) => {
    if (a === b) return 1
    const product = covariance[a]![a]! * covariance[b]![b]!
    return product > 0 ? entry / Math.sqrt(product) : 0
  }))
}

/**
 * Externally studentised residuals: each divided by its standard error as estimated from the other points.
 * @param residual weighted residuals
 * @param dof points minus parameters; with fewer than 2 none is defined
 * @returns null where undefined (dof < 2, or a point that the fit goes through by force)
 */
export function studentise(residual: ArrayLike<number>, leverage: ArrayLike<number>, dof: number): (number | null)[] {
  let rss = 0
  for (let i = 0; i < residual.length; i++) rss += residual[i]! * residual[i]!
  const studentised: (number | null)[] = []
  for (let i = 0; i < residual.length; i++) {
    const e = residual[i]!
    const open = 1 - leverage[i]!
    const others = dof < 2 || !(open > 1e-10) ? 0 : (rss - (e * e) / open) / (dof - 1)
    studentised.push(others > 0 ? e / Math.sqrt(others * open) : null)
  }
  return studentised
}

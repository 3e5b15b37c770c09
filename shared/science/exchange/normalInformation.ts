import { informationOf } from '../least-squares/covariance'
import { dotProduct } from './dotProduct'

/** Pivot of the scaled normal equations above which they keep ten digits of the inverse. */
const PIVOT = 1e-5
const POWER_TURNS = 40

export interface QuickInformation {
  /** (JᵀJ)⁻¹ by row, rows of held parameters zero; null when rank-deficient. */
  readonly inverse: Float64Array | null
  /** Condition number of the free columns scaled to length 1; null when rank-deficient. */
  readonly condition: number | null
}

/**
 * What `informationOf` gives, by Cholesky of the scaled normal equations where they are well conditioned, which is several times as fast for many parameters; by its QR otherwise.
 * @param jacobian column-major, n rows
 */
export function normalInformation(jacobian: Float64Array, n: number, held: readonly boolean[]): QuickInformation {
  const m = held.length
  const free = held.flatMap((isHeld, j) => isHeld ? [] : [j])
  const k = free.length
  const normal = new Float64Array(k * k)
  for (let a = 0; a < k; a++) {
    for (let b = 0; b <= a; b++) normal[a * k + b] = dotProduct(jacobian, free[a]! * n, jacobian, free[b]! * n, n)
  }
  const lengths = Float64Array.from(free, (_, a) => Math.sqrt(normal[a * k + a]!))
  for (let a = 0; a < k; a++) {
    for (let b = 0; b <= a; b++) {
      const entry = a === b ? 1 : normal[a * k + b]! / (lengths[a]! * lengths[b]!)
      normal[a * k + b] = entry
      normal[b * k + a] = entry
    }
  }
  const scaled = invertSymmetric(normal, k)
  if (scaled === null) return informationOf(jacobian, n, held)
  const inverse = new Float64Array(m * m)
  for (let a = 0; a < k; a++) {
    for (let b = 0; b < k; b++) inverse[free[a]! * m + free[b]!] = scaled[a * k + b]! / (lengths[a]! * lengths[b]!)
  }
  return { inverse, condition: Math.sqrt(largestEigenvalue(normal, k) * largestEigenvalue(scaled, k)) }
}

/** Inverse of a symmetric matrix of unit diagonal by Cholesky; null where a pivot is small. */
function invertSymmetric(matrix: Float64Array, k: number): Float64Array | null {
  const l = new Float64Array(k * k)
  for (let a = 0; a < k; a++) {
    for (let b = 0; b <= a; b++) {
      let sum = matrix[a * k + b]!
      for (let c = 0; c < b; c++) sum -= l[a * k + c]! * l[b * k + c]!
      if (a !== b) l[a * k + b] = sum / l[b * k + b]!
      else if (sum > PIVOT) l[a * k + a] = Math.sqrt(sum)
      else return null
    }
  }
  for (let a = 0; a < k; a++) {
    const pivot = 1 / l[a * k + a]!
    for (let b = 0; b < a; b++) {
      let sum = 0
      for (let c = b; c < a; c++) sum -= l[a * k + c]! * l[c * k + b]!
      l[a * k + b] = sum * pivot
    }
    l[a * k + a] = pivot
  }
  const inverse = new Float64Array(k * k)
  for (let a = 0; a < k; a++) {
    for (let b = 0; b <= a; b++) {
      let sum = 0
      for (let c = a; c < k; c++) sum += l[c * k + a]! * l[c * k + b]!
      inverse[a * k + b] = sum
      inverse[b * k + a] = sum
    }
  }
  return inverse
}

/** By powers of the matrix on its row of the largest diagonal; within a few per cent also where two eigenvalues are close. */
function largestEigenvalue(matrix: Float64Array, k: number): number {
  let row = 0
  for (let a = 1; a < k; a++) if (matrix[a * k + a]! > matrix[row * k + row]!) row = a
  let v = matrix.slice(row * k, (row + 1) * k)
  let value = 0
  let next = new Float64Array(k)
  for (let turn = 0; turn < POWER_TURNS; turn++) {
    let square = 0
    for (let a = 0; a < k; a++) square += v[a]! * v[a]!
    const inverse = 1 / Math.sqrt(square)
    let length = 0
    for (let a = 0; a < k; a++) {
      let sum = 0
      for (let b = 0; b < k; b++) sum += matrix[a * k + b]! * v[b]! * inverse
      next[a] = sum
      length += sum * sum
    }
    const before = value
    value = Math.sqrt(length);
    [v, next] = [next, v]
    if (Math.abs(value - before) <= 1e-6 * value) break
  }
  return value
}

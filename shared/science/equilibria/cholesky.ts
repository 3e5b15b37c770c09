/** Cholesky of a small symmetric positive definite matrix, scaled to a unit diagonal, in place. */

/** Replaces the lower triangle of H by that of L with D H D = L Lᵀ, D = diag(scale); false where H is not positive definite. */
export function factorScaled(matrix: Float64Array, scale: Float64Array, n: number): boolean {
  for (let k = 0; k < n; k++) {
    scale[k] = 1 / Math.sqrt(matrix[k * n + k]!)
    if (!(scale[k]! < Infinity)) return false
  }
  for (let i = 0; i < n; i++) {
    for (let k = 0; k <= i; k++) {
      let sum = matrix[i * n + k]! * scale[i]! * scale[k]!
      for (let p = 0; p < k; p++) sum -= matrix[i * n + p]! * matrix[k * n + p]!
      if (i === k && !(sum > 0)) return false
      matrix[i * n + k] = i === k ? Math.sqrt(sum) : sum / matrix[k * n + k]!
    }
  }
  return true
}

/** Solves H x = b with what {@link factorScaled} left; x replaces b. */
export function solveScaled(factor: Float64Array, scale: Float64Array, b: Float64Array, n: number): void {
  for (let i = 0; i < n; i++) {
    let sum = b[i]! * scale[i]!
    for (let p = 0; p < i; p++) sum -= factor[i * n + p]! * b[p]!
    b[i] = sum / factor[i * n + i]!
  }
  for (let i = n - 1; i >= 0; i--) {
    let sum = b[i]!
    for (let p = i + 1; p < n; p++) sum -= factor[p * n + i]! * b[p]!
    b[i] = sum / factor[i * n + i]!
  }
  for (let i = 0; i < n; i++) b[i]! *= scale[i]!
}

/** Σ aᵢ·bᵢ over n entries from a place in each array: four sums side by side, which the processor adds without waiting for one another. */
export function dotProduct(a: Float64Array, fromA: number, b: Float64Array, fromB: number, n: number): number {
  let s0 = 0
  let s1 = 0
  let s2 = 0
  let s3 = 0
  let i = 0
  for (; i + 3 < n; i += 4) {
    s0 += a[fromA + i]! * b[fromB + i]!
    s1 += a[fromA + i + 1]! * b[fromB + i + 1]!
    s2 += a[fromA + i + 2]! * b[fromB + i + 2]!
    s3 += a[fromA + i + 3]! * b[fromB + i + 3]!
  }
  for (; i < n; i++) s0 += a[fromA + i]! * b[fromB + i]!
  return s0 + s1 + (s2 + s3)
}

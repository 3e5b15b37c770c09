import type { Point, Workspace } from './workspace'

const EPSILON = 2 ** -52
/** Pivot of the scaled normal equations under which they are given up for QR. */
const CHOLESKY_PIVOT = 1e-7

/**
 * Column norms and gradient of a point, and which parameters are free: one that sits on a bound and is pushed outwards is held.
 * @returns largest cosine between the residual and a free column; NaN when the Jacobian is not finite
 */
export function measureColumns(ws: Workspace, point: Point, lower: Float64Array, upper: Float64Array): number {
  const { n, m, norms, gradient, free } = ws
  const length = Math.sqrt(point.sum)
  let cosine = 0
  let count = 0
  for (let j = 0; j < m; j++) {
    const offset = j * n
    let square = 0
    let product = 0
    for (let i = 0; i < n; i++) {
      const entry = point.jacobian[offset + i]!
      square += entry * entry
      product += entry * point.residual[i]!
    }
    const norm = Math.sqrt(square)
    if (!(norm < Infinity)) return NaN
    norms[j] = norm
    gradient[j] = product
    const isHeld = (point.p[j]! <= lower[j]! && product > 0) || (point.p[j]! >= upper[j]! && product < 0)
    if (isHeld) continue
    free[count++] = j
    if (norm > 0 && length > 0) cosine = Math.max(cosine, Math.abs(product) / (norm * length))
  }
  ws.freeCount = count
  return cosine
}

/** R and Qᵀr of the free columns: scaled Cholesky when well conditioned, Householder QR otherwise. */
export function factor(ws: Workspace, point: Point): void {
  if (!factorCholesky(ws, point)) factorQr(ws, point)
}

/** Householder QR of the free columns: fills `r` and `qtr`. */
export function factorQr(ws: Workspace, point: Point): void {
  const { n, m, columns, rotated, r, qtr, free, freeCount } = ws
  for (let c = 0; c < freeCount; c++) {
    const from = free[c]! * n
    for (let i = 0; i < n; i++) columns[c * n + i] = point.jacobian[from + i]!
  }
  rotated.set(point.residual)
  for (let c = 0; c < freeCount; c++) {
    const pivot = reflect(ws, c)
    r[c * m + c] = pivot
    qtr[c] = rotated[c]!
    for (let d = c + 1; d < freeCount; d++) r[c * m + d] = columns[d * n + c]!
  }
}

/** Applies the reflection that zeroes column c below its diagonal to the later columns and the residual; returns the diagonal. */
function reflect(ws: Workspace, c: number): number {
  const { n, columns, rotated, freeCount } = ws
  const offset = c * n
  let square = 0
  for (let i = c; i < n; i++) square += columns[offset + i]! * columns[offset + i]!
  if (square === 0) return 0
  const head = columns[offset + c]!
  const pivot = head > 0 ? -Math.sqrt(square) : Math.sqrt(square)
  columns[offset + c] = head - pivot
  const factorOfV = 1 / (pivot * (head - pivot))
  for (let d = c + 1; d < freeCount; d++) addReflected(columns, offset, columns, d * n, c, n, factorOfV)
  addReflected(columns, offset, rotated, 0, c, n, factorOfV)
  return pivot
}

function addReflected(v: Float64Array, vOffset: number, target: Float64Array, offset: number, from: number, n: number, factorOfV: number): void {
  let product = 0
  for (let i = from; i < n; i++) product += v[vOffset + i]! * target[offset + i]!
  product *= factorOfV
  for (let i = from; i < n; i++) target[offset + i]! += product * v[vOffset + i]!
}

/** The same R (signs apart) and Qᵀr from the normal equations with columns scaled to length 1; false when too ill conditioned. */
function factorCholesky(ws: Workspace, point: Point): boolean {
  const { n, m, r, qtr, free, freeCount, norms, gradient, damped: normal } = ws
  const { jacobian } = point
  for (let c = 0; c < freeCount; c++) {
    if (!(norms[free[c]!]! > 0)) return false
    for (let d = c; d < freeCount; d++) {
      let sum = 0
      const a = free[c]! * n
      const b = free[d]! * n
      for (let i = 0; i < n; i++) sum += jacobian[a + i]! * jacobian[b + i]!
      normal[c * m + d] = sum / (norms[free[c]!]! * norms[free[d]!]!)
    }
  }
  for (let c = 0; c < freeCount; c++) {
    let square = normal[c * m + c]!
    for (let i = 0; i < c; i++) square -= r[i * m + c]! * r[i * m + c]!
    if (!(square > CHOLESKY_PIVOT)) return false
    const pivot = Math.sqrt(square)
    r[c * m + c] = pivot
    for (let d = c + 1; d < freeCount; d++) {
      let sum = normal[c * m + d]!
      for (let i = 0; i < c; i++) sum -= r[i * m + c]! * r[i * m + d]!
      r[c * m + d] = sum / pivot
    }
    let right = gradient[free[c]!]! / norms[free[c]!]!
    for (let i = 0; i < c; i++) right -= r[i * m + c]! * qtr[i]!
    qtr[c] = right / pivot
  }
  for (let c = 0; c < freeCount; c++) {
    for (let d = c; d < freeCount; d++) r[c * m + d]! *= norms[free[d]!]!
  }
  return true
}

/** Number of leading free columns whose pivot is more than rounding: less than `freeCount` means rank-deficient. */
export function numericalRank(ws: Workspace): number {
  const { n, m, r, free, freeCount, norms } = ws
  const tolerance = 4 * EPSILON * Math.sqrt(n)
  for (let c = 0; c < freeCount; c++) {
    if (!(Math.abs(r[c * m + c]!) > tolerance * norms[free[c]!]!)) return c
  }
  return freeCount
}

/** Gauss–Newton direction R·x = Qᵀr into `newton`; columns beyond the rank get no share. */
export function solveNewton(ws: Workspace, rank: number): void {
  const { m, r, qtr, newton, freeCount } = ws
  for (let i = freeCount - 1; i >= 0; i--) {
    if (i >= rank) {
      newton[i] = 0
      continue
    }
    let sum = qtr[i]!
    for (let j = i + 1; j < rank; j++) sum -= r[i * m + j]! * newton[j]!
    newton[i] = sum / r[i * m + i]!
  }
}

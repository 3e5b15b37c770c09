import { numericalRank, solveNewton } from './factor'
import type { Workspace } from './workspace'

const SMALLEST = 2.2250738585072014e-308

/**
 * Finds λ ≥ 0 such that the step of min ‖R·x − Qᵀr‖² + λ‖D·x‖² has ‖D·x‖ = delta within a tenth, or λ = 0 when the Gauss–Newton step is
 * shorter; leaves the step in `newton`.
 * @param previous λ of the step before, the starting value
 * @returns λ
 * @source Moré, Lect. Notes Math. 630, 105 (1978), section 5
 */
export function findDamping(ws: Workspace, delta: number, previous: number): number {
  const { freeCount } = ws
  const rank = numericalRank(ws)
  solveNewton(ws, rank)
  let length = scaledLength(ws)
  let excess = length - delta
  if (excess <= 0.1 * delta) return 0

  let low = rank === freeCount ? newtonCorrection(ws, ws.r, length, excess, delta) : 0
  const steepest = steepestLength(ws)
  let high = steepest > 0 ? steepest / delta : SMALLEST / Math.min(delta, 0.1)
  let lambda = Math.min(Math.max(previous, low), high)
  if (lambda === 0) lambda = steepest / length
  for (let turn = 0; turn < 10; turn++) {
    if (lambda === 0) lambda = Math.max(SMALLEST, 0.001 * high)
    solveDamped(ws, lambda)
    length = scaledLength(ws)
    const before = excess
    excess = length - delta
    if (Math.abs(excess) <= 0.1 * delta || (low === 0 && excess <= before && before < 0)) break
    if (excess > 0) low = Math.max(low, lambda)
    else high = Math.min(high, lambda)
    lambda = Math.max(low, lambda + newtonCorrection(ws, ws.damped, length, excess, delta))
  }
  return lambda
}

/** ‖D·x‖ of the step in `newton`. */
function scaledLength({ free, freeCount, scale, newton }: Workspace): number {
  let sum = 0
  for (let c = 0; c < freeCount; c++) {
    const part = scale[free[c]!]! * newton[c]!
    sum += part * part
  }
  return Math.sqrt(sum)
}

/** ‖D⁻¹Rᵀ·Qᵀr‖, the scaled length of the gradient. */
function steepestLength({ m, r, qtr, free, freeCount, scale }: Workspace): number {
  let sum = 0
  for (let c = 0; c < freeCount; c++) {
    let part = 0
    for (let i = 0; i <= c; i++) part += r[i * m + c]! * qtr[i]!
    part /= scale[free[c]!]!
    sum += part * part
  }
  return Math.sqrt(sum)
}

/** Newton's correction to λ for ‖D·x(λ)‖ = delta, from the triangular factor that belongs to λ. */
function newtonCorrection(ws: Workspace, triangle: Float64Array, length: number, excess: number, delta: number): number {
  const { m, free, freeCount, scale, newton, work1 } = ws
  let square = 0
  for (let c = 0; c < freeCount; c++) {
    const d = scale[free[c]!]!
    let part = (d * d * newton[c]!) / length
    for (let i = 0; i < c; i++) part -= triangle[i * m + c]! * work1[i]!
    work1[c] = part / triangle[c * m + c]!
    square += work1[c]! * work1[c]!
  }
  return excess / delta / square
}

/** Solves the problem with √λ·D below R by Givens rotations; the triangular factor goes to `damped`, the step to `newton`. */
function solveDamped(ws: Workspace, lambda: number): void {
  const { m, r, damped, qtr, newton, free, freeCount, scale, work1, work2 } = ws
  const root = Math.sqrt(lambda)
  for (let i = 0; i < freeCount; i++) {
    for (let j = i; j < freeCount; j++) damped[i * m + j] = r[i * m + j]!
    work1[i] = qtr[i]!
  }
  for (let j = 0; j < freeCount; j++) {
    work2.fill(0, j, freeCount)
    work2[j] = root * scale[free[j]!]!
    rotateIn(ws, j)
  }
  for (let i = freeCount - 1; i >= 0; i--) {
    let sum = work1[i]!
    for (let j = i + 1; j < freeCount; j++) sum -= damped[i * m + j]! * newton[j]!
    newton[i] = damped[i * m + i] === 0 ? 0 : sum / damped[i * m + i]!
  }
}

/** Rotates the row in `work2` (zero before position `from`) into the triangle, the right-hand side along with it. */
function rotateIn({ m, damped, freeCount, work1, work2 }: Workspace, from: number): void {
  let right = 0
  for (let i = from; i < freeCount; i++) {
    const low = work2[i]!
    if (low === 0) continue
    const high = damped[i * m + i]!
    const length = Math.sqrt(high * high + low * low)
    const cosine = high / length
    const sine = low / length
    damped[i * m + i] = length
    const top = cosine * work1[i]! + sine * right
    right = -sine * work1[i]! + cosine * right
    work1[i] = top
    for (let j = i + 1; j < freeCount; j++) {
      const entry = damped[i * m + j]!
      damped[i * m + j] = cosine * entry + sine * work2[j]!
      work2[j] = -sine * entry + cosine * work2[j]!
    }
  }
}

import type { Model, Settings } from '../models/define'
import { invertNormal, QUICK_PARAMETERS, solveNormal } from './normalEquations'
import type { SeparableSearch } from './varpro'

/** Points as the fit uses them; weights are 1/σ, null for equal ones. */
export interface QuickData {
  readonly x: ArrayLike<number>
  readonly y: ArrayLike<number>
  readonly weights: ArrayLike<number> | null
  readonly settings: Settings
}

/** Minimum with the inverse of JᵀWJ: parameters, sum of squares and what their covariance needs. */
export interface QuickFit {
  readonly parameters: readonly number[]
  /** Weighted residual sum of squares. */
  readonly sumOfSquares: number
  /** (JᵀWJ)⁻¹ by row. */
  readonly inverse: readonly number[]
  readonly evaluations: number
}

export { QUICK_PARAMETERS } from './normalEquations'
const MOST_EVALUATIONS = 40
const STEP = 1e-11
const FIRST_DAMPING = 1e-3
/** Relative length of a step below which the errors shrink by a steady factor. */
const STEADY = 0.05

const gradient = new Float64Array(QUICK_PARAMETERS)
const normal = new Float64Array(QUICK_PARAMETERS ** 2)
const right = new Float64Array(QUICK_PARAMETERS)
const trialNormal = new Float64Array(QUICK_PARAMETERS ** 2)
const trialRight = new Float64Array(QUICK_PARAMETERS)
const step = new Float64Array(QUICK_PARAMETERS)
const current = new Float64Array(QUICK_PARAMETERS)
const trial = new Float64Array(QUICK_PARAMETERS)
/** Undamped step at the point before, and what was taken of it. */
const stepBefore = new Float64Array(QUICK_PARAMETERS)
const taken = new Float64Array(QUICK_PARAMETERS)

/**
 * Levenberg–Marquardt on the normal equations for few, well told apart parameters away from their bounds: nothing is stored but JᵀWJ and JᵀWr, which
 * a small fit builds while it computes the model. Near the minimum each step leaves a share of the error that hangs on the curvature of the residuals;
 * two steps tell that share, and the next one is longer by it. It ends when the undamped step no longer moves a parameter by 1e-11 of itself.
 * @param start inside the bounds
 * @returns null whenever anything is not plain: ill conditioned, a bound in reach, no convergence, a value that is not finite. Then the full search decides
 * @source Levenberg, Q. Appl. Math. 2, 164 (1944); Marquardt, J. SIAM 11, 431 (1963)
 */
export function solveQuickly(model: Model, data: QuickData, start: ArrayLike<number>): QuickFit | null {
  const m = model.names.length
  if (m > QUICK_PARAMETERS || data.x.length < m) return null
  for (let j = 0; j < m; j++) current[j] = start[j]!
  let sum = accumulate(model, data, current, normal, right)
  let damping = 0
  let evaluations = 1
  let knowsBefore = false
  if (!(sum < Infinity)) return null
  for (;;) {
    if (!solveNormal(m, normal, right, damping, step)) return null
    const length = relativeLength(m)
    // Near rounding of the signal a sum of squares says nothing of the parameters any more.
    if (damping === 0 && length <= STEP) break
    const stretch = damping === 0 && knowsBefore && length <= STEADY ? stretchOf(m) : 1
    if (evaluations >= MOST_EVALUATIONS || !moveInside(model, m, stretch)) return null
    const next = accumulate(model, data, trial, trialNormal, trialRight)
    evaluations += 1
    if (next <= sum * (1 + 1e-12) || (damping === 0 && length <= 1e-7 && next <= sum * (1 + 1e-6))) {
      knowsBefore = damping === 0
      for (let j = 0; j < m; j++) {
        stepBefore[j] = step[j]!
        taken[j] = trial[j]! - current[j]!
        current[j] = trial[j]!
      }
      copySystem(m)
      sum = next
      damping = damping > 1e-7 ? damping * 0.1 : 0
    } else {
      knowsBefore = false
      if (!(damping < 1e6)) return null
      damping = damping === 0 ? FIRST_DAMPING : damping * 10
    }
  }
  return { parameters: firstOf(current, m), sumOfSquares: sum, inverse: invertNormal(m), evaluations }
}

const firstOf = (p: Float64Array, m: number): number[] => m === 3 ? [p[0]!, p[1]!, p[2]!] : m === 2 ? [p[0]!, p[1]!] : Array.from(p.subarray(0, m))

function copySystem(m: number): void {
  for (let j = 0; j < m; j++) right[j] = trialRight[j]!
  for (let j = 0; j < m * m; j++) normal[j] = trialNormal[j]!
}

/** Largest part of the step relative to its parameter. */
function relativeLength(m: number): number {
  let largest = 0
  for (let a = 0; a < m; a++) {
    const part = Math.abs(step[a]! / (current[a]! || 1))
    if (!(part <= largest)) largest = part
  }
  return largest
}

/**
 * 1/(1 − ρ), with ρ the share of the error that an undamped step leaves: error e gives step −(1 − ρ)·e, so the change of the step over what was taken tells
 * 1 − ρ, in the metric of the normal matrix's diagonal. 1 where the two steps tell nothing of the kind.
 */
function stretchOf(m: number): number {
  let over = 0
  let under = 0
  for (let a = 0; a < m; a++) {
    const weighted = normal[a * m + a]! * taken[a]!
    over += weighted * (stepBefore[a]! - step[a]!)
    under += weighted * taken[a]!
  }
  const left = over / under
  return left > 0.7 && left < 1.5 ? 1 / left : 1
}

const seeded = new Float64Array(QUICK_PARAMETERS)

/**
 * Variable projection with weights and covariance: the start comes from the grid of a prepared search, so that none is needed.
 * @param search prepared for the same model, times, weights and settings
 * @source Golub & Pereyra, SIAM J. Numer. Anal. 10, 413 (1973)
 */
export function projectQuickly(model: Model, data: QuickData, search: SeparableSearch): QuickFit | null {
  const { separable, names } = model
  if (separable === null || names.length > QUICK_PARAMETERS) return null
  const { tau, linear } = search.seed(data.y)
  for (let j = 0; j < names.length; j++) {
    const c = separable.linear.indexOf(names[j]!)
    seeded[j] = c < 0 ? tau : linear[c]!
    if (!(seeded[j]! > model.lower[j]! && seeded[j]! < model.upper[j]!)) return null
  }
  return solveQuickly(model, data, seeded)
}

/** Sum of squares at p, JᵀWJ (lower half) and JᵀW(y − f). */
function accumulate(model: Model, { x, y, weights, settings }: QuickData, p: Float64Array, matrix: Float64Array, vector: Float64Array): number {
  const m = model.names.length
  if (m === 3) return accumulateThree(model, { x, y, weights, settings }, p, matrix, vector)
  if (m === 2) return accumulateTwo(model, { x, y, weights, settings }, p, matrix, vector)
  matrix.fill(0)
  vector.fill(0)
  let sum = 0
  for (let i = 0; i < x.length; i++) {
    const value = model.valueAndGradient(x[i]!, p, settings, gradient)
    const w = weights === null ? 1 : weights[i]!
    const residual = w * (y[i]! - value)
    sum += residual * residual
    for (let a = 0; a < m; a++) {
      const ga = w * gradient[a]!
      vector[a]! += ga * residual
      for (let b = 0; b <= a; b++) matrix[a * m + b]! += ga * w * gradient[b]!
    }
  }
  return sum
}

/** The same for three parameters, in variables that stay in registers: most relaxation fits are these. */
function accumulateThree(model: Model, { x, y, weights, settings }: QuickData, p: Float64Array, matrix: Float64Array, vector: Float64Array): number {
  const evaluate = model.valueAndGradient
  const n = x.length
  let sum = 0, v0 = 0, v1 = 0, v2 = 0, m00 = 0, m10 = 0, m11 = 0, m20 = 0, m21 = 0, m22 = 0
  for (let i = 0; i < n; i++) {
    const value = evaluate(x[i]!, p, settings, gradient)
    const w = weights === null ? 1 : weights[i]!
    const residual = w * (y[i]! - value)
    const g0 = w * gradient[0]!
    const g1 = w * gradient[1]!
    const g2 = w * gradient[2]!
    sum += residual * residual
    v0 += g0 * residual
    v1 += g1 * residual
    v2 += g2 * residual
    m00 += g0 * g0
    m10 += g1 * g0
    m11 += g1 * g1
    m20 += g2 * g0
    m21 += g2 * g1
    m22 += g2 * g2
  }
  vector[0] = v0
  vector[1] = v1
  vector[2] = v2
  matrix[0] = m00
  matrix[3] = m10
  matrix[4] = m11
  matrix[6] = m20
  matrix[7] = m21
  matrix[8] = m22
  return sum
}

/** The same for two parameters. */
function accumulateTwo(model: Model, { x, y, weights, settings }: QuickData, p: Float64Array, matrix: Float64Array, vector: Float64Array): number {
  const evaluate = model.valueAndGradient
  const n = x.length
  let sum = 0, v0 = 0, v1 = 0, m00 = 0, m10 = 0, m11 = 0
  for (let i = 0; i < n; i++) {
    const value = evaluate(x[i]!, p, settings, gradient)
    const w = weights === null ? 1 : weights[i]!
    const residual = w * (y[i]! - value)
    const g0 = w * gradient[0]!
    const g1 = w * gradient[1]!
    sum += residual * residual
    v0 += g0 * residual
    v1 += g1 * residual
    m00 += g0 * g0
    m10 += g1 * g0
    m11 += g1 * g1
  }
  vector[0] = v0
  vector[1] = v1
  matrix[0] = m00
  matrix[2] = m10
  matrix[3] = m11
  return sum
}

function moveInside(model: Model, m: number, stretch: number): boolean {
  const { lower, upper } = model
  for (let a = 0; a < m; a++) {
    const next = current[a]! + stretch * step[a]!
    if (!(next > lower[a]! && next < upper[a]!)) return false
    trial[a] = next
  }
  return true
}

/** Small weighted linear least squares, free or with non-negative coefficients, and one-sided bounds from the profile of chi-square. */
import { tQuantile } from '../statistics'

/** A procedure's no: what is wrong, and what would be accepted. */
export interface KineticsRefusal { readonly ok: false, readonly reason: string, readonly message: string, readonly accepted: string }
export const refuseKinetics = (reason: string, message: string, accepted: string): KineticsRefusal => ({ ok: false, reason, message, accepted })

export interface LinearSolution {
  readonly values: readonly number[]
  readonly chi2: number
  /** (AᵀWA)⁻¹, not scaled by the residual variance. */
  readonly covariance: readonly (readonly number[])[]
}

const dot = (a: readonly number[], b: readonly number[]): number => a.reduce((sum, v, i) => sum + v * b[i]!, 0)

/** Solves by Gram–Schmidt with a second pass. Null where the columns cannot be told apart (relative remainder below 1e-8). */
export function solveWeighted(columns: readonly (readonly number[])[], y: readonly number[], sigma: readonly number[]): LinearSolution | null {
  const basis: number[][] = []
  const upper = columns.map(() => columns.map(() => 0))
  for (const [j, column] of columns.entries()) {
    const v = column.map((c, i) => c / sigma[i]!)
    const size = Math.sqrt(dot(v, v))
    for (let pass = 0; pass < 2; pass++) basis.forEach((q, i) => {
      const part = dot(q, v)
      upper[i]![j]! += part
      q.forEach((c, r) => { v[r]! -= part * c })
    })
    const left = Math.sqrt(dot(v, v))
    if (!(left > 1e-8 * size)) return null
    upper[j]![j] = left
    basis.push(v.map(c => c / left))
  }
  const rest = y.map((v, i) => v / sigma[i]!)
  const right = basis.map(q => {
    const part = dot(q, rest)
    q.forEach((c, r) => { rest[r]! -= part * c })
    return part
  })
  const inverse = invertUpper(upper)
  return { values: inverse.map(row => dot(row, right)), chi2: dot(rest, rest), covariance: inverse.map(a => inverse.map(b => dot(a, b))) }
}

function invertUpper(upper: readonly (readonly number[])[]): number[][] {
  const n = upper.length
  const inverse = upper.map(() => Array.from({ length: n }, () => 0))
  for (let j = 0; j < n; j++) for (let i = j; i >= 0; i--) {
    let sum = i === j ? 1 : 0
    for (let k = i + 1; k <= j; k++) sum -= upper[i]![k]! * inverse[k]![j]!
    inverse[i]![j] = sum / upper[i]![i]!
  }
  return inverse
}

export interface NonNegativeSolution { readonly values: readonly number[], readonly chi2: number, readonly active: readonly number[] }

/** Least squares with every coefficient at or above zero, exact: each of the 2^n sets of terms is solved (n at most 8). */
export function solveNonNegative(columns: readonly (readonly number[])[], y: readonly number[], sigma: readonly number[]): NonNegativeSolution {
  let best: NonNegativeSolution = { values: columns.map(() => 0), chi2: y.reduce((sum, v, i) => sum + (v / sigma[i]!) ** 2, 0), active: [] }
  for (let mask = 1; mask < 1 << columns.length; mask++) {
    const active = columns.map((_, j) => j).filter(j => mask >> j & 1)
    const solved = solveWeighted(active.map(j => columns[j]!), y, sigma)
    if (!solved || solved.chi2 >= best.chi2 || solved.values.some(v => v < 0)) continue
    const values = columns.map(() => 0)
    active.forEach((j, i) => { values[j] = solved.values[i]! })
    best = { values, chi2: solved.chi2, active }
  }
  return best
}

/** Data of a non-negative fit with the variance of unit weight by which chi-square is judged. */
export interface NonNegativeProblem {
  readonly columns: readonly (readonly number[])[]
  readonly y: readonly number[]
  readonly sigma: readonly number[]
  readonly variance: number
  readonly dof: number
}

/** Chi-square with one coefficient held and the others refitted at or above zero. */
export function profileChi2(problem: NonNegativeProblem, index: number, value: number): number {
  const others = problem.columns.filter((_, j) => j !== index)
  return solveNonNegative(others, problem.y.map((v, i) => v - value * problem.columns[index]![i]!), problem.sigma).chi2
}

/** One-sided 95 % upper bound of a coefficient: where the profiled chi-square has risen by s²·t². */
export function upperBound95(problem: NonNegativeProblem, best: NonNegativeSolution, index: number): number {
  const limit = best.chi2 + problem.variance * tQuantile(0.95, problem.dof) ** 2
  let low = best.values[index]!
  const size = Math.sqrt(problem.columns[index]!.reduce((sum, c, i) => sum + (c / problem.sigma[i]!) ** 2, 0))
  let step = Math.sqrt(problem.variance) / size
  // rates without scatter leave no room above the best value
  if (step === 0) return low
  while (profileChi2(problem, index, low + step) < limit) step *= 2
  let high = low + step
  for (let i = 0; i < 80 && high - low > 1e-12 * high; i++) {
    const middle = (low + high) / 2
    if (profileChi2(problem, index, middle) < limit) low = middle
    else high = middle
  }
  return high
}

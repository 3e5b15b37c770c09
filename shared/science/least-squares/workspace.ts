import type { LeastSquaresProblem, SolveOptions, StopReason } from './problem'

/** One point of the search: parameters, residual and Jacobian there, and the sum of squares. */
export interface Point {
  readonly p: Float64Array
  readonly residual: Float64Array
  /** Column-major. */
  readonly jacobian: Float64Array
  sum: number
}

/**
 * Memory of one solve, allocated once. Triangular factors are stored by row with stride m; positions in `r`, `qtr`, `newton`, `damped` count the
 * free parameters, all other arrays of length m count every parameter.
 */
export interface Workspace {
  readonly n: number
  readonly m: number
  readonly columns: Float64Array
  readonly rotated: Float64Array
  readonly r: Float64Array
  readonly damped: Float64Array
  readonly qtr: Float64Array
  readonly newton: Float64Array
  readonly gradient: Float64Array
  readonly norms: Float64Array
  readonly scale: Float64Array
  readonly move: Float64Array
  readonly diagonal: Float64Array
  readonly work1: Float64Array
  readonly work2: Float64Array
  readonly free: Int32Array
  freeCount: number
}

export function createWorkspace(n: number, m: number): Workspace {
  const zeros = (length: number) => new Float64Array(length)
  return {
    n, m, columns: zeros(n * m), rotated: zeros(n), r: zeros(m * m), damped: zeros(m * m), qtr: zeros(m), newton: zeros(m), gradient: zeros(m),
    norms: zeros(m), scale: zeros(m), move: zeros(m), diagonal: zeros(m), work1: zeros(m), work2: zeros(m), free: new Int32Array(m), freeCount: m,
  }
}

export function createPoint(n: number, m: number): Point {
  return { p: new Float64Array(m), residual: new Float64Array(n), jacobian: new Float64Array(n * m), sum: NaN }
}

export function sumOfSquares(values: Float64Array): number {
  let sum = 0
  for (let i = 0; i < values.length; i++) sum += values[i]! * values[i]!
  return sum
}

/** State of one search; `current` and `trial` change places when a step is taken. */
export interface Search {
  readonly problem: LeastSquaresProblem
  readonly options: Required<SolveOptions>
  readonly ws: Workspace
  current: Point
  trial: Point
  radius: number
  lambda: number
  evaluations: number
  taken: number
  stop: StopReason | null
}

/** Makes the trial point the current one. */
export function takeTrial(search: Search): void {
  const old = search.current
  search.current = search.trial
  search.trial = old
  search.taken++
}

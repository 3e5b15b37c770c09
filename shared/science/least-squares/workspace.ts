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

/** Everything one solve writes to. */
export interface SolveMemory {
  readonly ws: Workspace
  readonly points: readonly [Point, Point]
}

const idle = new Map<number, SolveMemory[]>()
const IDLE_LIMIT = 4

/**
 * Memory for a solve of this size: some that an earlier solve gave back, or new. Allocation is what a small fit spends most of its time on. Nothing is
 * read before it is written, so what was in it changes no result; a solve inside a solve takes another piece.
 */
export function takeMemory(n: number, m: number): SolveMemory {
  const found = idle.get(n * 65536 + m)?.pop()
  return found ?? { ws: createWorkspace(n, m), points: [createPoint(n, m), createPoint(n, m)] }
}

export function giveBack(memory: SolveMemory): void {
  const { n, m } = memory.ws
  const key = n * 65536 + m
  const kept = idle.get(key)
  if (!kept) idle.set(key, [memory])
  else if (kept.length < IDLE_LIMIT) kept.push(memory)
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
  readonly memory: SolveMemory
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

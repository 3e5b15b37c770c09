import { findDamping } from './damping'
import { factor, measureColumns } from './factor'
import { polish, stationarity } from './polish'
import type { LeastSquaresProblem, Solution, SolveOptions, StopReason } from './problem'
import { giveBack, sumOfSquares, takeMemory, takeTrial, type Search, type Workspace } from './workspace'

const EPSILON = 2 ** -52
/** Scaled length of the first step allowed, in units of the scaled start. */
const FIRST_RADIUS = 100
/** Projection of the residual on the tangent plane over its length below which a minimum is believed. */
const STATIONARY = 1e-4

/**
 * Minimises a weighted sum of squares within bounds: trust region with column scaling (Moré), active set for the bounds, and Gauss–Newton steps by
 * QR at the end until they no longer get shorter, which brings the parameters to the last digits the data hold.
 * @param start brought inside the bounds first
 * @returns where it ended and why; `converged` only at a point that is stationary on the free parameters
 * @source Moré, Lect. Notes Math. 630, 105 (1978)
 */
export function solve(problem: LeastSquaresProblem, start: ArrayLike<number>, options: SolveOptions = {}): Solution {
  const search = openSearch(problem, start, options)
  while (search.stop === null) iterate(search)
  const found = search.stop !== 'maxEvaluations' && search.stop !== 'notFinite'
  if (found) polish(search)
  return close(search, found)
}

function openSearch(problem: LeastSquaresProblem, start: ArrayLike<number>, options: SolveOptions): Search {
  const { n, m, lower, upper } = problem
  const memory = takeMemory(n, m)
  const [current, trial] = memory.points
  for (let j = 0; j < m; j++) current.p[j] = Math.min(Math.max(start[j]!, lower[j]!), upper[j]!)
  problem.evaluate(current.p, current.residual, current.jacobian)
  current.sum = sumOfSquares(current.residual)
  const defaults = { reductionTolerance: 1e-10, stepTolerance: 1e-10, gradientTolerance: 1e-12, maxEvaluations: 200 * (m + 1), polishSteps: 80 }
  return {
    problem, options: { ...defaults, ...options }, memory, ws: memory.ws, current, trial,
    radius: 0, lambda: 0, evaluations: 1, taken: 0, stop: stopOfSum(current.sum),
  }
}

function stopOfSum(sum: number): StopReason | null {
  if (!(sum < Infinity)) return 'notFinite'
  return sum === 0 ? 'exact' : null
}

/** One factorisation and as many trial steps as it takes to get lower, or to find that there is no lower point. */
function iterate(search: Search): void {
  const { ws, problem, options, current } = search
  const cosine = measureColumns(ws, current, problem.lower, problem.upper)
  if (Number.isNaN(cosine)) search.stop = 'notFinite'
  else if (ws.freeCount === 0 || cosine <= options.gradientTolerance) search.stop = 'zeroGradient'
  if (search.stop !== null) return
  updateScale(search)
  factor(ws, current)
  for (;;) {
    const taken = tryStep(search)
    if (search.stop !== null || taken) return
  }
}

function updateScale({ ws, taken }: Search): void {
  for (let j = 0; j < ws.m; j++) {
    const norm = ws.norms[j]!
    if (taken === 0) ws.scale[j] = norm === 0 ? 1 : norm
    else ws.scale[j] = Math.max(ws.scale[j]!, norm)
  }
}

/** Proposes, evaluates and judges one step; true when it was taken. */
function tryStep(search: Search): boolean {
  const { problem, options, ws } = search
  // A start of all zeros has no length: 1 then stands in for it.
  if (search.radius === 0) search.radius = FIRST_RADIUS * (scaledNorm(ws, search.current.p) || 1)
  const step = propose(search)
  const { current, trial } = search
  if (search.taken === 0) search.radius = Math.min(search.radius, step.length)
  problem.evaluate(trial.p, trial.residual, trial.jacobian)
  search.evaluations++
  trial.sum = sumOfSquares(trial.residual)
  const isComparable = trial.sum < 100 * current.sum
  const actual = isComparable ? 1 - trial.sum / current.sum : -1
  const ratio = step.predicted > 0 ? actual / step.predicted : 0
  adjustRadius(search, step, actual, ratio)
  const isTaken = ratio >= 1e-4
  if (isTaken) takeTrial(search)
  const size = scaledNorm(ws, search.current.p)
  const isFlat = (tolerance: number) => !step.isClipped && Math.abs(actual) <= tolerance && step.predicted <= tolerance && ratio <= 2
  if (search.current.sum === 0) search.stop = 'exact'
  else if (isFlat(options.reductionTolerance)) search.stop = 'smallReduction'
  else if (search.radius <= options.stepTolerance * size) search.stop = 'smallStep'
  else if (search.evaluations >= options.maxEvaluations) search.stop = 'maxEvaluations'
  else if (search.radius <= EPSILON * size) search.stop = 'smallStep'
  return isTaken
}

interface Step {
  readonly length: number
  /** Relative fall of the sum of squares that the linear model promises. */
  readonly predicted: number
  /** Derivative of the relative sum of squares along the step. */
  readonly slope: number
  readonly isClipped: boolean
}

/**
 * Step inside the trust region, projected on the bounds. Where the projection spoils the descent, the parameters that ran into a bound are held for
 * this step and the rest is solved again.
 */
function propose(search: Search): Step {
  for (;;) {
    search.lambda = findDamping(search.ws, search.radius, search.lambda)
    const step = project(search)
    if (!step.isClipped || step.predicted > 0 || !holdClipped(search)) return step
  }
}

/** Writes the projected step to `trial.p` and `move`. */
function project({ ws, current, trial, problem, lambda }: Search): Step {
  const { m, move, newton, free, freeCount, scale, r, qtr } = ws
  move.fill(0)
  for (let c = 0; c < freeCount; c++) move[free[c]!] = -newton[c]!
  let isClipped = false
  let square = 0
  for (let j = 0; j < m; j++) {
    const wanted = current.p[j]! + move[j]!
    const allowed = Math.min(Math.max(wanted, problem.lower[j]!), problem.upper[j]!)
    if (allowed !== wanted) {
      isClipped = true
      move[j] = allowed - current.p[j]!
    }
    trial.p[j] = allowed
    square += (scale[j]! * move[j]!) ** 2
  }
  let curvature = 0
  let linear = 0
  for (let i = 0; i < freeCount; i++) {
    let part = 0
    for (let c = i; c < freeCount; c++) part += r[i * m + c]! * move[free[c]!]!
    curvature += part * part
    linear += part * qtr[i]!
  }
  const slope = isClipped ? linear : -(curvature + lambda * square)
  return { length: Math.sqrt(square), predicted: -(2 * linear + curvature) / current.sum, slope: slope / current.sum, isClipped }
}

/** Takes the clipped parameters out of the free set; false when nothing would be left, and then the set stays. */
function holdClipped({ ws, current, trial }: Search): boolean {
  const { free, freeCount, newton } = ws
  const kept: number[] = []
  for (let c = 0; c < freeCount; c++) {
    const j = free[c]!
    if (trial.p[j]! === current.p[j]! - newton[c]!) kept.push(j)
  }
  if (kept.length === 0 || kept.length === freeCount) return false
  free.set(kept)
  ws.freeCount = kept.length
  factor(ws, current)
  return true
}

function adjustRadius(search: Search, step: Step, actual: number, ratio: number): void {
  if (ratio <= 0.25) {
    let shrink = actual >= 0 ? 0.5 : (0.5 * step.slope) / (step.slope + 0.5 * actual)
    if (actual <= -1 || !(shrink >= 0.1)) shrink = 0.1
    search.radius = Math.min(shrink, 0.5) * Math.min(search.radius, step.length > 0 ? step.length * 10 : search.radius)
    search.lambda /= shrink
  } else if (search.lambda === 0 || ratio >= 0.75) {
    search.radius = 2 * step.length
    search.lambda *= 0.5
  }
}

function scaledNorm({ m, scale }: Workspace, p: Float64Array): number {
  let sum = 0
  for (let j = 0; j < m; j++) sum += (scale[j]! * p[j]!) ** 2
  return Math.sqrt(sum)
}

function close(search: Search, found: boolean): Solution {
  const { problem, current, ws } = search
  const offset = found ? stationarity(search) : Infinity
  const converged = found && (search.stop === 'exact' || offset <= STATIONARY)
  const atBound = new Array<boolean>(problem.m).fill(found)
  for (let c = 0; c < ws.freeCount; c++) atBound[ws.free[c]!] = false
  giveBack(search.memory)
  return {
    parameters: current.p.slice(), residual: current.residual.slice(), jacobian: current.jacobian.slice(), sumOfSquares: current.sum,
    atBound, evaluations: search.evaluations, stop: search.stop ?? 'maxEvaluations', converged,
  }
}

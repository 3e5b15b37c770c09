import type { Model, Settings } from '../models/define'
import { informationOf } from './covariance'
import { prepareData, refuse, type FitData, type PreparedData } from './fitData'
import type { FitOutcome } from './outcome'
import type { LeastSquaresProblem, Solution, SolveOptions } from './problem'
import { projectQuickly, QUICK_PARAMETERS, solveQuickly, type QuickFit } from './quick'
import { reportFit } from './reportFit'
import { findSecondOpinion } from './secondOpinion'
import { solve } from './trustRegion'
import { sumOfSquares } from './workspace'
import { createSearches, type Searches, type SeparableSearch } from './varpro'

export type { FitData } from './fitData'

/** σ pooled over tubes measured alike. */
export interface PooledSigma {
  readonly sigma: number
  /** Degrees of freedom it was estimated with. */
  readonly dof: number
}

/** Accuracy of ln τ that the projection brings to the start; the descent brings the rest. */
const START_TOLERANCE = 0.05

export interface FitOptions {
  /** Numbers of the acquisition that the model needs (TR, angle). */
  readonly settings?: Settings
  /** Parameters held at a value, by name. */
  readonly fixed?: Readonly<Record<string, number>>
  /** Start values in place of the model's own. */
  readonly start?: Readonly<Record<string, number>>
  /** Coverage of the interval. Default 0.95. */
  readonly level?: number
  readonly pooledSigma?: PooledSigma
  /** The standard deviations given stand for their ratios only; their common size is estimated from the scatter. Default false. */
  readonly relativeSigma?: boolean
  /** Ask an independent program whether a lower minimum exists (about a millisecond). Default false. */
  readonly secondOpinion?: boolean
  /** A search prepared for exactly these times and weights: spares its grid. */
  readonly search?: SeparableSearch
  /** Searches shared by fits of one series: one grid for each set of times and weights. */
  readonly searches?: Searches
  readonly solve?: SolveOptions
}

/**
 * Fits one model to one set of points.
 *
 * Errors: with σ known, (JᵀWJ)⁻¹ scaled by max(1, χ²red); with σ pooled over like tubes, σ²(JᵀJ)⁻¹ and the degrees of freedom of the pool; otherwise
 * s²(JᵀJ)⁻¹. No interval is stated where the fit did not converge, sits on a bound, is rank-deficient (condition above 1e8) or has no more points than
 * parameters.
 * @returns a refusal, with what would be accepted, where the data cannot be fitted at all
 * @throws Error for a name in `fixed` or `start` that the model does not have
 */
export function fitModel(model: Model, data: FitData, options: FitOptions = {}): FitOutcome {
  checkNames(model, options)
  const free = model.names.flatMap((name, j) => options.fixed && name in options.fixed ? [] : [j])
  const prepared = prepareData(model, data, options.settings ?? {}, free.length)
  if (!prepared.ok) return prepared
  const weights = prepared.sigma && prepared.sigma.map(s => 1 / s)
  const quick = fitQuickly(model, prepared, weights, options)
  const start = quick ? Float64Array.from(quick.parameters) : findStart(model, prepared, options)
  if (!start) return refuse('noStart', 'The points give no start values for this model.', 'A start value for every parameter, or other points.')
  const problem = problemOf(model, prepared, free, start)
  const solution = quick === null ? solve(problem, free.map(j => start[j]!), options.solve) : solutionAt(problem, start, quick.evaluations)
  if (solution.stop === 'notFinite') {
    return refuse('modelNotFinite', 'The model has no finite value at the start values.', 'Start values at which the model can be computed.')
  }
  const parameters = start.slice()
  free.forEach((j, c) => { parameters[j] = solution.parameters[c]! })
  const information = informationOf(solution.jacobian, problem.n, solution.atBound)
  const secondOpinion = options.secondOpinion ? findSecondOpinion(problem, solution, ownStart(model, prepared, free)) : null
  return reportFit({ model, data, prepared, options, free, parameters, solution, information, secondOpinion })
}

/**
 * The quick way for few parameters that are well told apart and away from their bounds, which most relaxation fits are: from the projection where the model is
 * separable, else from the start given or guessed. Null sends the fit through the full search.
 */
function fitQuickly(model: Model, prepared: PreparedData, weights: readonly number[] | null, options: FitOptions): QuickFit | null {
  if (options.fixed || options.solve || model.names.length > QUICK_PARAMETERS || prepared.x.length <= model.names.length) return null
  const data = { x: prepared.x, y: prepared.y, weights, settings: prepared.settings }
  if (options.start) {
    const start = findStart(model, prepared, options)
    return start && solveQuickly(model, data, start)
  }
  const search = options.search ?? (model.separable ? (options.searches ?? createSearches()).find(model, { x: prepared.x, sigma: prepared.sigma, settings: prepared.settings }) : null)
  return search && projectQuickly(model, data, search)
}

/** Where the model itself would begin, inside the bounds. */
function ownStart(model: Model, { x, y, settings }: PreparedData, free: readonly number[]): readonly number[] | null {
  const guess = model.guess(x, y, settings)
  if (guess === null) return null
  const start = free.map((j) => {
    const name = model.names[j]!
    const { min, max } = model.params[name]!
    return Math.min(Math.max(guess[name]!, min), max)
  })
  return start.every(Number.isFinite) ? start : null
}

/** The end of a quick fit as a solve reports it. */
function solutionAt(problem: LeastSquaresProblem, parameters: Float64Array, evaluations: number): Solution {
  const residual = new Float64Array(problem.n)
  const jacobian = new Float64Array(problem.n * problem.m)
  problem.evaluate(parameters, residual, jacobian)
  const sum = sumOfSquares(residual)
  return { parameters, residual, jacobian, sumOfSquares: sum, atBound: new Array<boolean>(problem.m).fill(false), evaluations: evaluations + 1, stop: sum === 0 ? 'exact' : 'smallStep', converged: true }
}

function checkNames(model: Model, { fixed, start }: FitOptions): void {
  for (const name of [...Object.keys(fixed ?? {}), ...Object.keys(start ?? {})]) {
    if (!model.names.includes(name)) throw new Error(`Model ${model.id} has no parameter ${name}.`)
  }
}

/** Full parameter vector to start from: given values first, then the projection, then the model's own guess. */
function findStart(model: Model, data: PreparedData, options: FitOptions): Float64Array | null {
  const known: Readonly<Record<string, number>> = { ...options.start, ...options.fixed }
  const isComplete = model.names.every(name => name in known)
  const found = isComplete ? known : project(model, data, options) ?? model.guess(data.x, data.y, data.settings)
  if (!found) return null
  const start = Float64Array.from(model.names, (name) => {
    const { min, max } = model.params[name]!
    return name in known ? known[name]! : Math.min(Math.max(found[name]!, min), max)
  })
  return start.every(Number.isFinite) ? start : null
}

function project(model: Model, { x, y, sigma, settings }: PreparedData, options: FitOptions): Readonly<Record<string, number>> | null {
  const { separable } = model
  if (!separable || Object.keys(options.fixed ?? {}).length > 0) return null
  const search = options.search ?? (options.searches ?? createSearches()).find(model, { x, sigma, settings })
  if (!search) return null
  const { tau, linear } = search.search(y, START_TOLERANCE)
  return Object.fromEntries([[separable.nonlinear, tau], ...separable.linear.map((name, c) => [name, linear[c]!] as const)])
}

/** The weighted problem over the free parameters. */
export function problemOf(model: Model, { x, y, sigma, settings }: PreparedData, free: readonly number[], all: Float64Array): LeastSquaresProblem {
  const n = x.length
  const m = free.length
  const gradient = new Float64Array(model.names.length)
  const p = all.slice()
  return {
    n, m,
    lower: Float64Array.from(free, j => model.params[model.names[j]!]!.min),
    upper: Float64Array.from(free, j => model.params[model.names[j]!]!.max),
    evaluate(q, residual, jacobian) {
      for (let c = 0; c < m; c++) p[free[c]!] = q[c]!
      for (let i = 0; i < n; i++) {
        const weight = sigma ? 1 / sigma[i]! : 1
        residual[i] = weight * (model.valueAndGradient(x[i]!, p, settings, gradient) - y[i]!)
        for (let c = 0; c < m; c++) jacobian[c * n + i] = weight * gradient[free[c]!]!
      }
    },
  }
}

import { firstVaryingColumn, mostAligned, seedReader, type ProjectionGrid } from './projectionGrid'
import { withStandards, type Model, type ModelParameter, type Settings } from '../models/define'

/** Best fit over the nonlinear parameter, the linear ones eliminated. */
export interface Projection {
  readonly tau: number
  /** Coefficients of the basis functions. */
  readonly linear: readonly number[]
  /** Weighted residual sum of squares. */
  readonly rss: number
}

/** A search prepared for one set of times: the grid of orthonormal basis vectors is computed once and serves every signal measured there. */
export interface SeparableSearch {
  /**
   * @param y signal at the times of the search
   * @param logTolerance accuracy of ln τ; coarse where a descent follows. Default 1e-7
   */
  search: (y: ArrayLike<number>, logTolerance?: number) => Projection
  /**
   * A start for a descent, read off the grid alone: τ and its coefficients by interpolation between the best five points. No model value is computed.
   */
  seed: (y: ArrayLike<number>) => { readonly tau: number, readonly linear: Float64Array }
  /** The same for one given τ. */
  projectAt: (tau: number, y: ArrayLike<number>) => Projection
}

const GRID = 128

/**
 * Variable projection: for each τ the linear coefficients have a closed form, which leaves a search in one dimension, on a logarithmic grid and then
 * by parabolas between the neighbours of its best point. No start values are needed.
 * @param x times
 * @param weights 1/σ per point; null for equal weights
 * @returns null for a model without a separable part
 * @source Golub & Pereyra, SIAM J. Numer. Anal. 10, 413 (1973)
 */
export function prepareSeparable(model: Model, x: ArrayLike<number>, weights: ArrayLike<number> | null, settings: Settings): SeparableSearch | null {
  const { separable } = model
  if (!separable) return null
  const k = separable.linear.length
  const n = x.length
  const known = withStandards(model.settings, settings)
  const phi = new Float64Array(k)
  const weightAt = (i: number) => weights ? weights[i]! : 1
  const fill = (tau: number, q: Float64Array) => {
    for (let i = 0; i < n; i++) {
      separable.basis(x[i]!, tau, known, phi)
      for (let c = 0; c < k; c++) q[c * n + i] = phi[c]! * weightAt(i)
    }
    return orthonormalise(q, n, k)
  }
  const taus = logarithmicGrid(separable.range(x), model.params[separable.nonlinear]!)
  const bases = new Float64Array(GRID * n * k)
  const triangles = taus.map((tau, g) => fill(tau, bases.subarray(g * n * k, (g + 1) * n * k)))
  const shape = { n, k, count: GRID, bases }
  const grid: ProjectionGrid = { ...shape, triangles, logTaus: taus.map(Math.log), firstVarying: firstVaryingColumn(shape) }
  const read = seedReader(grid)
  const wySeed = new Float64Array(n)
  const seed = (y: ArrayLike<number>) => {
    for (let i = 0; i < n; i++) wySeed[i] = weights ? y[i]! * weights[i]! : y[i]!
    return read(wySeed)
  }
  const scratch = new Float64Array(n * k)
  const projectAt = (tau: number, y: ArrayLike<number>): Projection => {
    const r = fill(tau, scratch)
    const { products, rest } = project(scratch, weighted(y, weightAt, n), n, k)
    return { tau, linear: backSubstitute(r, products, k), rss: rest }
  }
  const search = (y: ArrayLike<number>, logTolerance = 1e-7): Projection => {
    const wy = weighted(y, weightAt, n)
    const best = mostAligned(grid, wy)
    const objective = (logTau: number) => {
      fill(Math.exp(logTau), scratch)
      return project(scratch, wy, n, k).rest
    }
    const bracket = [best - 1, best, best + 1].map(g => Math.log(taus[Math.min(Math.max(g, 0), GRID - 1)]!)) as [number, number, number]
    return projectAt(Math.exp(minimise(objective, bracket, logTolerance)), y)
  }
  return { search, projectAt, seed }
}

/** Searches of one series by model, times, weights and settings: tubes measured alike share one grid. */
export interface Searches {
  find: (model: Model, acquisition: { readonly x: readonly number[], readonly sigma: readonly number[] | null, readonly settings: Settings }) => SeparableSearch | null
}

export function createSearches(): Searches {
  const known = new Map<string, SeparableSearch | null>()
  return {
    find(model, { x, sigma, settings }) {
      const key = `${model.id}|${x.join()}|${sigma ? sigma.join() : ''}|${Object.values(settings).join()}`
      const found = known.get(key)
      if (found !== undefined) return found
      const search = prepareSeparable(model, x, sigma && sigma.map(s => 1 / s), settings)
      known.set(key, search)
      return search
    },
  }
}

function logarithmicGrid([low, high]: readonly [number, number], { min, max }: ModelParameter): number[] {
  const from = Math.max(low, min)
  const ratio = Math.min(high, max) / from
  return Array.from({ length: GRID }, (_, g) => from * ratio ** (g / (GRID - 1)))
}

function weighted(y: ArrayLike<number>, weightAt: (i: number) => number, n: number): Float64Array {
  const wy = new Float64Array(n)
  for (let i = 0; i < n; i++) wy[i] = y[i]! * weightAt(i)
  return wy
}

/** Gram–Schmidt in place; a column that depends on those before it becomes zero. Returns R by row. */
function orthonormalise(q: Float64Array, n: number, k: number): Float64Array {
  const r = new Float64Array(k * k)
  for (let c = 0; c < k; c++) {
    let before = 0
    for (let i = 0; i < n; i++) before += q[c * n + i]! ** 2
    for (let b = 0; b < c; b++) {
      let product = 0
      for (let i = 0; i < n; i++) product += q[b * n + i]! * q[c * n + i]!
      r[b * k + c] = product
      for (let i = 0; i < n; i++) q[c * n + i]! -= product * q[b * n + i]!
    }
    let square = 0
    for (let i = 0; i < n; i++) square += q[c * n + i]! ** 2
    const isDependent = !(square > 1e-20 * before)
    const length = isDependent ? 0 : Math.sqrt(square)
    r[c * k + c] = length
    for (let i = 0; i < n; i++) q[c * n + i] = isDependent ? 0 : q[c * n + i]! / length
  }
  return r
}

/** Products of y with the orthonormal columns, and the sum of squares they leave. */
function project(q: Float64Array, y: Float64Array, n: number, k: number): { products: number[], rest: number } {
  const products: number[] = []
  for (let c = 0; c < k; c++) {
    let product = 0
    for (let i = 0; i < n; i++) product += q[c * n + i]! * y[i]!
    products.push(product)
  }
  let rest = 0
  for (let i = 0; i < n; i++) {
    let left = y[i]!
    for (let c = 0; c < k; c++) left -= products[c]! * q[c * n + i]!
    rest += left * left
  }
  return { products, rest }
}

function backSubstitute(r: Float64Array, products: readonly number[], k: number): number[] {
  const linear = new Array<number>(k).fill(0)
  for (let c = k - 1; c >= 0; c--) {
    let sum = products[c]!
    for (let d = c + 1; d < k; d++) sum -= r[c * k + d]! * linear[d]!
    linear[c] = r[c * k + c] === 0 ? 0 : sum / r[c * k + c]!
  }
  return linear
}

/**
 * Minimum of a function between the outer points of a bracket: steps of successive parabolas, halving the larger side where a parabola fails.
 * At the edge of the grid two points of the bracket coincide and the edge itself may be the answer.
 */
function minimise(objective: (x: number) => number, bracket: readonly [number, number, number], tolerance: number): number {
  let [low, best, high] = bracket
  let value = objective(best)
  let atLow = low === best ? value : objective(low)
  let atHigh = high === best ? value : objective(high)
  for (let turn = 0; turn < 60 && high - low > tolerance; turn++) {
    const left = best - low
    const right = high - best
    const numerator = left * left * (value - atHigh) - right * right * (value - atLow)
    const denominator = 2 * (left * (value - atHigh) + right * (value - atLow))
    let next = best - numerator / denominator
    const isInside = next > low && next < high
    if (isInside && Math.abs(next - best) < tolerance) return next
    if (!isInside || turn % 4 === 3) next = left > right ? best - 0.38 * left : best + 0.38 * right
    const found = objective(next)
    if (found < value) {
      if (next > best) [low, atLow] = [best, value]
      else [high, atHigh] = [best, value];
      [best, value] = [next, found]
    } else if (next > best) [high, atHigh] = [next, found]
    else [low, atLow] = [next, found]
  }
  return best
}

import type { LeastSquaresProblem } from '../least-squares/problem'
import { dotProduct } from './dotProduct'

/**
 * Z = b − Σ Aᵢ·(Γᵢ²/4)/((Γᵢ²/4) + (δ − δᵢ)²): a baseline b, and for each pool its depth A, full width at half depth Γ (ppm) and place δ (ppm from water).
 * Parameters stand in the order b, A₁, Γ₁, δ₁, A₂, …; with the baseline held at 1 it is left out.
 */
export interface LorentzianData {
  readonly offset_ppm: ArrayLike<number>
  readonly z: ArrayLike<number>
  /** 1/σ of each point; null = equal weights. */
  readonly weights: ArrayLike<number> | null
}

/** Depth of one pool at an offset. */
export function lorentzianAt(offset_ppm: number, pool: { readonly depth: number, readonly width_ppm: number, readonly offset_ppm: number }): number {
  const square = (pool.width_ppm * pool.width_ppm) / 4
  return (pool.depth * square) / (square + (offset_ppm - pool.offset_ppm) ** 2)
}

/** The whole problem, every parameter free within its bounds. */
export function lorentzianProblem(data: LorentzianData, hasBaseline: boolean, bounds: { readonly lower: Float64Array, readonly upper: Float64Array }): LeastSquaresProblem {
  const { offset_ppm: x, z, weights } = data
  const n = x.length
  const first = hasBaseline ? 1 : 0
  const m = bounds.lower.length
  return {
    n, m, ...bounds,
    evaluate(p, residual, jacobian) {
      for (let i = 0; i < n; i++) {
        const w = weights === null ? 1 : weights[i]!
        residual[i] = w * ((hasBaseline ? p[0]! : 1) - z[i]!)
        if (hasBaseline) jacobian[i] = w
      }
      for (let j = first; j < m; j += 3) addPool({ x, weights, n }, j, p, residual, jacobian)
    },
  }
}

function addPool({ x, weights, n }: { x: ArrayLike<number>, weights: ArrayLike<number> | null, n: number }, j: number, p: Float64Array, residual: Float64Array, jacobian: Float64Array): void {
  const depth = p[j]!
  const width = p[j + 1]!
  const centre = p[j + 2]!
  const square = (width * width) / 4
  const [toDepth, toWidth, toCentre] = [j * n, (j + 1) * n, (j + 2) * n]
  const perWidth = (-depth * width) / 2
  for (let i = 0; i < n; i++) {
    const w = weights === null ? 1 : weights[i]!
    const d = x[i]! - centre
    const inverse = 1 / (square + d * d)
    const shape = w * square * inverse
    const steep = w * d * inverse * inverse
    residual[i] = residual[i]! - depth * shape
    jacobian[toDepth + i] = -shape
    jacobian[toWidth + i] = perWidth * d * steep
    jacobian[toCentre + i] = -2 * depth * square * steep
  }
}

/** Widths and places alone: the linear parameters, baseline and depths, have a closed form at each of them. */
export interface ProjectedLorentzian {
  readonly problem: LeastSquaresProblem
  /** Baseline (where fitted) and depths at given widths and places; NaN where two pools are one. */
  readonly linearAt: (p: Float64Array) => Float64Array
}

/**
 * Variable projection: the problem in Γ and δ with depths and baseline eliminated, the Jacobian without the term of second order.
 * @source Golub & Pereyra, SIAM J. Numer. Anal. 10, 413 (1973); Kaufman, BIT 15, 49 (1975)
 */
export function projectedLorentzian(data: LorentzianData, hasBaseline: boolean, bounds: { readonly lower: Float64Array, readonly upper: Float64Array }): ProjectedLorentzian {
  const { offset_ppm: x, z, weights } = data
  const n = x.length
  const pools = bounds.lower.length / 2
  const k = pools + (hasBaseline ? 1 : 0)
  const q = new Float64Array(n * k)
  const r = new Float64Array(k * k)
  /** (δ − δᵢ) and 1/((Γᵢ²/4) + (δ − δᵢ)²) of each pool, kept for the Jacobian. */
  const distances = new Float64Array(n * pools)
  const inverses = new Float64Array(n * pools)
  const unit = weights ?? new Float64Array(n).fill(1)
  const linear = new Float64Array(k)
  const target = new Float64Array(n)
  for (let i = 0; i < n; i++) target[i] = unit[i]! * (hasBaseline ? z[i]! : z[i]! - 1)
  const first = hasBaseline ? 1 : 0
  const project = (p: Float64Array, residual: Float64Array): void => {
    if (hasBaseline) for (let i = 0; i < n; i++) q[i] = unit[i]!
    for (let c = 0; c < pools; c++) {
      const square = (p[2 * c]! * p[2 * c]!) / 4
      const centre = p[2 * c + 1]!
      const at = (first + c) * n
      for (let i = 0; i < n; i++) {
        const d = x[i]! - centre
        const inverse = 1 / (square + d * d)
        distances[c * n + i] = d
        inverses[c * n + i] = inverse
        q[at + i] = -unit[i]! * square * inverse
      }
    }
    orthonormalise(q, r, n, k)
    for (let i = 0; i < n; i++) residual[i] = -target[i]!
    for (let c = 0; c < k; c++) linear[c] = -removeFrom(residual, 0, q, c * n, n)
    for (let c = k - 1; c >= 0; c--) {
      let sum = linear[c]!
      for (let d = c + 1; d < k; d++) sum -= r[c * k + d]! * linear[d]!
      linear[c] = sum / r[c * k + c]!
    }
  }
  const scratch = new Float64Array(n)
  return {
    linearAt(p) {
      project(p, scratch)
      return linear.slice()
    },
    problem: {
      n, m: 2 * pools, ...bounds,
      evaluate(p, residual, jacobian) {
        project(p, residual)
        for (let c = 0; c < pools; c++) {
          const width = p[2 * c]!
          const depth = linear[first + c]!
          const toWidth = 2 * c * n
          const toCentre = toWidth + n
          const perWidth = -0.5 * width * depth
          const perCentre = -0.5 * width * width * depth
          for (let i = 0; i < n; i++) {
            const d = distances[c * n + i]!
            const inverse = inverses[c * n + i]!
            const steep = unit[i]! * d * inverse * inverse
            jacobian[toWidth + i] = perWidth * d * steep
            jacobian[toCentre + i] = perCentre * steep
          }
          for (let b = 0; b < k; b++) {
            removeFrom(jacobian, toWidth, q, b * n, n)
            removeFrom(jacobian, toCentre, q, b * n, n)
          }
        }
      },
    },
  }
}

/** Takes the part along a unit column out of a vector; returns its length along it. */
function removeFrom(values: Float64Array, from: number, q: Float64Array, column: number, n: number): number {
  const product = dotProduct(q, column, values, from, n)
  for (let i = 0; i < n; i++) values[from + i] = values[from + i]! - product * q[column + i]!
  return product
}

/** Modified Gram–Schmidt in place, which serves least squares as well as reflections where the right side goes through the same steps; R by row. A column that hangs on those before it leaves a zero pivot, and coefficients that are no numbers. */
function orthonormalise(q: Float64Array, r: Float64Array, n: number, k: number): void {
  for (let c = 0; c < k; c++) {
    for (let b = 0; b < c; b++) r[b * k + c] = removeFrom(q, c * n, q, b * n, n)
    const length = Math.sqrt(dotProduct(q, c * n, q, c * n, n))
    r[c * k + c] = length
    for (let i = 0; i < n; i++) q[c * n + i] = q[c * n + i]! / length
  }
}

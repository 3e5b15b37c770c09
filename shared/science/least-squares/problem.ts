/**
 * A weighted nonlinear least-squares problem: minimise ½·Σ rᵢ(p)² over lower ≤ p ≤ upper.
 *
 * `evaluate` fills both arrays in one pass and allocates nothing: residual[i] = wᵢ·(fᵢ(p) − yᵢ) with wᵢ = 1/σᵢ, and the Jacobian by
 * column, jacobian[j·n + i] = wᵢ·∂fᵢ/∂pⱼ.
 */
export interface LeastSquaresProblem {
  /** Number of residuals. */
  readonly n: number
  /** Number of parameters. */
  readonly m: number
  readonly lower: Float64Array
  readonly upper: Float64Array
  evaluate: (p: Float64Array, residual: Float64Array, jacobian: Float64Array) => void
}

/**
 * Why a solve ended. The first four are a found minimum; `maxEvaluations` and `notFinite` are not.
 * smallReduction: the sum of squares no longer falls; smallStep: the parameters no longer move; zeroGradient: the residual is orthogonal
 * to every free column; exact: the residual is zero.
 */
export type StopReason = 'smallReduction' | 'smallStep' | 'zeroGradient' | 'exact' | 'maxEvaluations' | 'notFinite'

/** Where a solve ended. The arrays are the caller's to keep. */
export interface Solution {
  readonly parameters: Float64Array
  readonly residual: Float64Array
  /** Column-major, at `parameters`. */
  readonly jacobian: Float64Array
  /** Σ rᵢ², weighted. */
  readonly sumOfSquares: number
  /** True for each parameter held at a bound that the data push against. */
  readonly atBound: readonly boolean[]
  readonly evaluations: number
  readonly stop: StopReason
  readonly converged: boolean
}

export interface SolveOptions {
  /** Relative fall of the sum of squares below which the search stops. Default 1e-10. */
  readonly reductionTolerance?: number
  /** Relative length of the step below which the search stops. Default 1e-10. */
  readonly stepTolerance?: number
  /** Cosine between the residual and every free column below which the search stops. Default 1e-12. */
  readonly gradientTolerance?: number
  /** Default 200·(m + 1). */
  readonly maxEvaluations?: number
  /** Gauss–Newton steps allowed after the search. Default 80. */
  readonly polishSteps?: number
}

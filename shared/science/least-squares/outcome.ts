import type { StopReason } from './problem'

/** How the standard deviation behind the errors was known: given with the data, pooled over like tubes, or estimated from this fit. */
export type SigmaUsed = 'known' | 'pooled' | 'estimated'

/** Why a finished fit states no interval. */
export type NoIntervalReason = 'notConverged' | 'onBound' | 'rankDeficient' | 'tooFewPoints'

export interface FittedParameter {
  readonly name: string
  readonly label: string
  readonly unit: string
  readonly value: number
  /** Standard error; null where it cannot be estimated (see {@link FitDone.noInterval}). */
  readonly se: number | null
  /** Student-t interval at {@link FitDone.level}; null where none may be stated. */
  readonly interval: readonly [number, number] | null
  readonly atBound: boolean
}

/** A finished fit. Arrays per point follow the order of the data given, left-out points included. */
export interface FitDone {
  readonly ok: true
  readonly modelId: string
  readonly modelVersion: number
  readonly engineVersion: number
  readonly parameters: readonly FittedParameter[]
  /** Parameters held by the caller, by name. */
  readonly fixed: Readonly<Record<string, number>>
  /** Over `parameters`, in their order; null where no standard errors exist. */
  readonly covariance: readonly (readonly number[])[] | null
  readonly correlation: readonly (readonly number[])[] | null
  /** Residual sum of squares in the unit of the signal squared, unweighted. */
  readonly rss: number
  /** Σ((y − f)/σ)² / dof with the σ given or pooled; null with an estimated σ, where it says nothing, and when dof is 0. */
  readonly reducedChi2: number | null
  /** Standard deviation of one point used for the errors; null when each point had its own or none could be estimated. */
  readonly sigma: number | null
  readonly sigmaUsed: SigmaUsed
  /** Points used minus parameters. */
  readonly dof: number
  /** Degrees of freedom of what the errors rest on: `dof` for the scatter of this fit, those of a pooled σ; null = unlimited, for a known σ that holds. */
  readonly intervalDof: number | null
  readonly level: number
  /** Akaike's criterion with the small-sample term, σ² counted as a parameter; null with too few points. */
  readonly aicc: number | null
  readonly r2: number
  /** Condition number of the column-scaled Jacobian; null when it is rank-deficient. */
  readonly condition: number | null
  readonly evaluations: number
  readonly stop: StopReason
  readonly converged: boolean
  readonly noInterval: { readonly reason: NoIntervalReason, readonly message: string } | null
  /** Model at every x given. */
  readonly fitted: readonly number[]
  /** y − f; null at points left out. */
  readonly residuals: readonly (number | null)[]
  /** Externally studentised; null at points left out and where it is undefined. */
  readonly studentised: readonly (number | null)[]
  /** Indices left out, ascending. */
  readonly excluded: readonly number[]
  /** What an independent program found from our optimum and from the model's start; null when not asked for. */
  readonly secondOpinion: SecondOpinion | null
}

export interface SecondOpinion {
  readonly agrees: boolean
  /** Lowest weighted sum of squares it reached. */
  readonly sumOfSquares: number
  readonly parameters: readonly number[]
}

export type RefusalReason =
  | 'lengthMismatch' | 'notFinite' | 'badSigma' | 'badSetting' | 'tooFewPoints' | 'tooFewDistinct' | 'constantSignal' | 'outOfDomain'
  | 'impossibleTiming' | 'noStart' | 'modelNotFinite'

/** A fit that was not made, and what would make it possible. */
export interface FitRefused {
  readonly ok: false
  readonly reason: RefusalReason
  /** What is wrong, and where. */
  readonly message: string
  /** What would be accepted. */
  readonly accepted: string
}

export type FitOutcome = FitDone | FitRefused

import type { FitRefused } from '../least-squares/outcome'
import type { Dimension } from '../unitTable'

/** A quantity on an axis of a model. */
export interface ModelAxis {
  /** Unit-suffixed name, as in files and results. */
  readonly name: string
  readonly label: string
  readonly unit: string
  readonly dimension: Dimension
}

export interface ModelParameter {
  readonly label: string
  readonly unit: string
  readonly min: number
  readonly max: number
}

/** A number the model needs that is known from the acquisition, not fitted. */
export interface ModelSetting {
  readonly label: string
  readonly unit: string
  readonly dimension: Dimension
  readonly min: number
  readonly max: number
  /** Used when none is given; null = must be given. */
  readonly standard: number | null
}

export type Settings = Readonly<Record<string, number>>

/**
 * The part of a model that is linear in all parameters but one: f = Σ cₖ·φₖ(x; τ). With it the fit needs no start.
 */
export interface Separable<P extends string> {
  readonly nonlinear: P
  /** In the order of the basis functions. */
  readonly linear: readonly P[]
  /** Fills phi[k] = φₖ(x; τ). */
  basis: (x: number, tau: number, settings: Settings, phi: Float64Array) => void
  /** Range of τ worth searching for these points. */
  range: (x: ArrayLike<number>) => readonly [number, number]
  /** False where the linear coefficients describe the mirror image of a possible signal. */
  isUpright: (linear: ArrayLike<number>) => boolean
}

/** A quantity computed from the fitted parameters, with its gradient so that its error follows from their covariance. */
export interface DerivedQuantity {
  readonly name: string
  readonly label: string
  readonly unit: string
  /** NaN where these parameters give none. */
  readonly value: (p: ArrayLike<number>) => number
  /** ∂value/∂pⱼ in the order of `params`. */
  readonly gradient: (p: ArrayLike<number>) => readonly number[]
}

export interface ModelExample<P extends string> {
  readonly x: readonly number[]
  readonly settings: Settings
  readonly truth: Readonly<Record<P, number>>
}

export interface ModelSpec<P extends string> {
  readonly id: string
  /** Goes up with any change that moves a number. */
  readonly version: number
  readonly title: string
  readonly equation: string
  readonly source: string
  readonly x: ModelAxis
  readonly y: ModelAxis
  /** In the order of the parameter vector. */
  readonly params: Readonly<Record<P, ModelParameter>>
  readonly settings: Readonly<Record<string, ModelSetting>>
  /**
   * Model value at one x; writes ∂f/∂pⱼ to gradient[j].
   * @param p parameters in the order of `params`
   */
  valueAndGradient: (x: number, p: ArrayLike<number>, settings: Settings, gradient: Float64Array) => number
  /** Start values; null when the data allow none. Must lie within the bounds. */
  guess: (x: readonly number[], y: readonly number[], settings: Settings) => Readonly<Record<P, number>> | null
  /** A reason why these points cannot be described by the model, whatever its parameters; null when there is none. */
  refuse: (x: readonly number[], settings: Settings) => FitRefused | null
  readonly separable: Separable<P> | null
  /** What follows from the parameters. Left out: nothing. */
  readonly derived?: readonly DerivedQuantity[]
  readonly example: ModelExample<P>
}

/** A declared model with the forms that follow from its declaration. */
export interface Model<P extends string = string> extends ModelSpec<P> {
  readonly names: readonly P[]
  /** Bounds in the order of the parameter vector. */
  readonly lower: Float64Array
  readonly upper: Float64Array
  /** Model value for parameters by name. */
  evaluate: (x: number, parameters: Readonly<Record<P, number>>, settings?: Settings) => number
  /** ∂f/∂p by name. */
  jacobian: (x: number, parameters: Readonly<Record<P, number>>, settings?: Settings) => Record<P, number>
}

/**
 * Declares a model once; the fitter, the plots, the help page and the tests read this declaration.
 * @throws Error when the declaration contradicts itself (no parameter, a bound above the other, a separable part that leaves a parameter out)
 */
export function defineModel<P extends string>(spec: ModelSpec<P>): Model<P> {
  const names = Object.keys(spec.params) as P[]
  checkSpec(spec, names)
  const toVector = (parameters: Readonly<Record<P, number>>) => names.map(name => parameters[name])
  return {
    ...spec,
    names,
    lower: Float64Array.from(names, name => spec.params[name].min),
    upper: Float64Array.from(names, name => spec.params[name].max),
    evaluate: (x, parameters, settings = {}) =>
      spec.valueAndGradient(x, toVector(parameters), withStandards(spec.settings, settings), new Float64Array(names.length)),
    jacobian: (x, parameters, settings = {}) => {
      const gradient = new Float64Array(names.length)
      spec.valueAndGradient(x, toVector(parameters), withStandards(spec.settings, settings), gradient)
      return Object.fromEntries(names.map((name, j) => [name, gradient[j]])) as Record<P, number>
    },
  }
}

/** The settings given, with the standard value for each that has one and was left out. */
export function withStandards(declared: Readonly<Record<string, ModelSetting>>, given: Settings): Settings {
  const settings: Record<string, number> = {}
  for (const name in declared) {
    const { standard } = declared[name]!
    if (standard !== null) settings[name] = standard
  }
  return Object.assign(settings, given)
}

function checkSpec<P extends string>(spec: ModelSpec<P>, names: readonly P[]): void {
  if (names.length === 0) throw new Error(`Model ${spec.id} declares no parameter.`)
  for (const name of names) {
    if (!(spec.params[name].min < spec.params[name].max)) throw new Error(`Model ${spec.id}: bounds of ${name} are the wrong way round.`)
  }
  if (spec.separable === null) return
  const split = [spec.separable.nonlinear, ...spec.separable.linear].sort().join()
  if (split !== [...names].sort().join()) throw new Error(`Model ${spec.id}: its separable part does not cover its parameters.`)
}

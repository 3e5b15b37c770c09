import type { Model } from '../models/define'
import { correlationOf, studentise, type Information } from './covariance'
import { ENGINE_VERSION } from './engine'
import type { FitData, PreparedData } from './fitData'
import type { FitOptions } from './fitModel'
import type { FitDone, FittedParameter, NoIntervalReason, SecondOpinion, SigmaUsed } from './outcome'
import { studentFactor } from './line'
import type { Solution } from './problem'

/** Condition number of the scaled Jacobian above which parameters are not told apart. */
export const LARGEST_CONDITION = 1e8

interface Parts {
  readonly model: Model
  readonly data: FitData
  readonly prepared: PreparedData
  readonly options: FitOptions
  /** Positions of the free parameters. */
  readonly free: readonly number[]
  /** All parameters, in the model's order. */
  readonly parameters: Float64Array
  readonly solution: Solution
  readonly information: Information
  readonly secondOpinion: SecondOpinion | null
}

/** Turns a solve into what is shown and stored. */
export function reportFit(parts: Parts): FitDone {
  const { model, data, prepared, options, free, solution, information } = parts
  const dof = prepared.x.length - free.length
  const sigmaUsed: SigmaUsed = prepared.sigma && !options.relativeSigma ? 'known' : options.pooledSigma ? 'pooled' : 'estimated'
  const level = options.level ?? 0.95
  const variance = varianceFactor(parts, dof)
  const noInterval = findNoInterval(parts, dof)
  const isRegular = noInterval === null || noInterval.reason === 'onBound' || noInterval.reason === 'tooFewPoints'
  const covariance = isRegular && variance !== null && information.inverse ? scaleInverse(information.inverse, free.length, variance) : null
  const isWithinSigma = sigmaUsed === 'known' && solution.sumOfSquares <= dof
  const intervalDof = sigmaUsed === 'pooled' ? options.pooledSigma!.dof : isWithinSigma ? null : dof
  const half = noInterval === null ? studentFactor(level, intervalDof) : null
  const fitted = fittedValues(parts)
  const misfit = prepared.used.map(i => data.y[i]! - fitted[i]!)
  const rss = misfit.reduce((sum, e) => sum + e * e, 0)
  return {
    ok: true, modelId: model.id, modelVersion: model.version, engineVersion: ENGINE_VERSION,
    parameters: free.map((j, c) => parameterOf(parts, j, c, covariance, half)),
    fixed: options.fixed ?? {}, covariance, correlation: covariance && correlationOf(covariance), rss,
    reducedChi2: sigmaUsed === 'estimated' || dof === 0 ? null : solution.sumOfSquares / dof / (sigmaUsed === 'pooled' ? options.pooledSigma!.sigma ** 2 : 1),
    sigma: sigmaUsed === 'known' ? commonValue(prepared.sigma!) : variance === null || prepared.sigma ? null : Math.sqrt(variance),
    sigmaUsed, dof, intervalDof, level, aicc: aiccOf(prepared, free.length, solution.sumOfSquares, sigmaUsed === 'known'), r2: r2Of(prepared, solution.sumOfSquares),
    condition: information.condition, evaluations: solution.evaluations, stop: solution.stop, converged: solution.converged, noInterval, fitted,
    residuals: spreadOver(data.x.length, prepared.used, misfit),
    studentised: spreadOver(data.x.length, prepared.used, studentisedOf(parts, dof)),
    excluded: prepared.excluded, secondOpinion: parts.secondOpinion,
  }
}

/** What (JᵀWJ)⁻¹ is multiplied by; null where no variance can be had. */
function varianceFactor({ prepared, options, solution }: Parts, dof: number): number | null {
  if (prepared.sigma && !options.relativeSigma) return dof > 0 ? Math.max(1, solution.sumOfSquares / dof) : 1
  if (options.pooledSigma) return options.pooledSigma.sigma ** 2
  return dof > 0 ? solution.sumOfSquares / dof : null
}

function findNoInterval({ model, free, solution, information }: Parts, dof: number): FitDone['noInterval'] {
  const because = (reason: NoIntervalReason, message: string) => ({ reason, message })
  if (!solution.converged) return because('notConverged', `The search ended without a minimum (${solution.stop}), so the values carry no error.`)
  if (information.condition === null || information.condition > LARGEST_CONDITION) {
    return because('rankDeficient', 'The points do not tell the parameters apart, so the values carry no error.')
  }
  const held = free.filter((_, c) => solution.atBound[c]).map(j => model.params[model.names[j]!]!.label)
  if (held.length > 0) {
    return because('onBound', `${held.join(' and ')} ${held.length === 1 ? 'sits' : 'sit'} on a bound; the other errors hold only with the value there.`)
  }
  if (dof < 1) return because('tooFewPoints', 'There are no more points than parameters, so the scatter cannot be judged.')
  return null
}

function scaleInverse(inverse: Float64Array, m: number, factor: number): number[][] {
  const rows: number[][] = []
  for (let a = 0; a < m; a++) {
    const row: number[] = []
    for (let b = 0; b < m; b++) row.push(inverse[a * m + b]! * factor)
    rows.push(row)
  }
  return rows
}

/** @param c position among the free parameters @param half Student-t factor; null for no interval */
function parameterOf({ model, parameters, solution }: Parts, j: number, c: number, covariance: number[][] | null, half: number | null): FittedParameter {
  const name = model.names[j]!
  const { label, unit } = model.params[name]!
  const value = parameters[j]!
  const atBound = solution.atBound[c]!
  const se = covariance && !atBound ? Math.sqrt(covariance[c]![c]!) : null
  return { name, label, unit, value, se, interval: se !== null && half !== null ? [value - half * se, value + half * se] : null, atBound }
}

function fittedValues({ model, data, prepared, parameters }: Parts): number[] {
  const gradient = new Float64Array(model.names.length)
  return data.x.map(x => model.valueAndGradient(x, parameters, prepared.settings, gradient))
}

function studentisedOf({ solution, information }: Parts, dof: number): (number | null)[] {
  if (!information.leverage) return Array.from(solution.residual, () => null)
  // The solver's residual is model minus data; shown residuals are data minus model.
  return studentise(Array.from(solution.residual, r => -r), information.leverage, dof)
}

function spreadOver(length: number, used: readonly number[], values: readonly (number | null)[]): (number | null)[] {
  if (length === values.length) return values.slice()
  const all = new Array<number | null>(length).fill(null)
  used.forEach((i, k) => { all[i] = values[k]! })
  return all
}

/** Burnham & Anderson's small-sample criterion; an estimated σ² is one more parameter. */
function aiccOf({ x }: PreparedData, m: number, sum: number, isKnown: boolean): number | null {
  const n = x.length
  const k = isKnown ? m : m + 1
  if (n - k - 1 <= 0 || (!isKnown && !(sum > 0))) return null
  return (isKnown ? sum : n * Math.log(sum / n)) + 2 * k + (2 * k * (k + 1)) / (n - k - 1)
}

function r2Of({ y, sigma }: PreparedData, sum: number): number {
  const weightOf = (i: number) => sigma ? 1 / sigma[i]! ** 2 : 1
  let total = 0
  let weighted = 0
  for (let i = 0; i < y.length; i++) {
    total += weightOf(i)
    weighted += weightOf(i) * y[i]!
  }
  const mean = weighted / total
  let spread = 0
  for (let i = 0; i < y.length; i++) spread += weightOf(i) * (y[i]! - mean) ** 2
  return 1 - sum / spread
}

function commonValue(values: readonly number[]): number | null {
  return values.every(value => value === values[0]) ? values[0]! : null
}

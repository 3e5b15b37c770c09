import type { Model } from '../models/define'
import { studentFactor } from './line'
import type { FitDone, FittedParameter } from './outcome'

/** Values of all parameters in the model's order, held ones included. */
export function parameterVector(model: Model, fit: FitDone): number[] {
  const values: Readonly<Record<string, number>> = { ...fit.fixed, ...Object.fromEntries(fit.parameters.map(one => [one.name, one.value])) }
  return model.names.map(name => values[name] ?? NaN)
}

/**
 * What a model derives from its parameters, with the error that their covariance gives it (linear propagation, gᵀCg). Quantities that these parameters do not
 * give are left out.
 */
export function derivedOf(model: Model, fit: FitDone): FittedParameter[] {
  const p = parameterVector(model, fit)
  return (model.derived ?? []).flatMap(({ name, label, unit, value: valueOf, gradient }) => {
    const value = valueOf(p)
    if (!Number.isFinite(value)) return []
    const se = standardError(fit, gradient(p), model.names)
    const half = se === null || fit.noInterval ? null : studentFactor(fit.level, fit.intervalDof) * se
    return [{ name, label, unit, value, se, interval: half === null ? null : [value - half, value + half] as const, atBound: false }]
  })
}

function standardError({ covariance, parameters }: FitDone, gradient: readonly number[], names: readonly string[]): number | null {
  if (covariance === null || parameters.some(one => one.se === null)) return null
  const g = parameters.map(one => gradient[names.indexOf(one.name)]!)
  let variance = 0
  for (let i = 0; i < g.length; i++) for (let j = 0; j < g.length; j++) variance += g[i]! * covariance[i]![j]! * g[j]!
  return variance >= 0 ? Math.sqrt(variance) : null
}

import type { Model } from '../models/define'
import { prepareData, type FitData } from './fitData'
import { problemOf, type FitOptions } from './fitModel'
import type { FitDone } from './outcome'
import { profileInterval, type ProfileInterval } from './profile'
import { solve } from './trustRegion'

/**
 * Profile-likelihood intervals of every free parameter of a finished fit, at its level and with its σ. Empty for a fit that states no interval.
 * @param options those of the fit
 */
export function profileFit(model: Model, data: FitData, fit: FitDone, options: FitOptions): { readonly name: string, readonly interval: ProfileInterval }[] {
  const prepared = prepareData(model, data, options.settings ?? {}, fit.parameters.length)
  if (!prepared.ok || fit.noInterval) return []
  const free = fit.parameters.map(one => model.names.indexOf(one.name))
  const values: Readonly<Record<string, number>> = { ...fit.fixed, ...Object.fromEntries(fit.parameters.map(one => [one.name, one.value])) }
  const all = Float64Array.from(model.names, name => values[name] ?? NaN)
  const problem = problemOf(model, prepared, free, all)
  const best = solve(problem, free.map(j => all[j]!))
  const variance = varianceOf(fit, best.sumOfSquares)
  const confidence = { level: fit.level, dof: fit.intervalDof ?? Infinity }
  return fit.parameters.flatMap(({ name, se }, at) => se === null || !(se > 0) ? [] : [{ name, interval: profileInterval(problem, best, { at, se, variance }, confidence) }])
}

/** What a rise of the weighted sum of squares by one squared standard error is worth. */
function varianceOf(fit: FitDone, sum: number): number {
  if (fit.sigmaUsed === 'pooled' && fit.sigma !== null) return fit.sigma ** 2
  return fit.sigmaUsed === 'known' ? Math.max(1, fit.reducedChi2 ?? 1) : sum / fit.dof
}

import { studentFactor } from './line'
import type { FitDone } from './outcome'

/**
 * The same fit with errors that rest on a σ pooled over like tubes instead of the scatter about this one. Values, residuals and what was seen of the search
 * stay; a fit that states no interval, or whose points had standard deviations of their own, is returned as it is.
 */
export function withPooledSigma(fit: FitDone, pool: { readonly sigma: number, readonly dof: number }): FitDone {
  if (fit.sigmaUsed !== 'estimated' || fit.noInterval || fit.covariance === null || fit.sigma === null || !(fit.sigma > 0)) return fit
  const factor = (pool.sigma / fit.sigma) ** 2
  const half = studentFactor(fit.level, pool.dof)
  const covariance = fit.covariance.map(row => row.map(value => value * factor))
  return {
    ...fit, covariance, sigma: pool.sigma, sigmaUsed: 'pooled', intervalDof: pool.dof, reducedChi2: fit.dof === 0 ? null : fit.rss / fit.dof / pool.sigma ** 2,
    parameters: fit.parameters.map((parameter, j) => {
      if (parameter.se === null) return parameter
      const se = Math.sqrt(covariance[j]![j]!)
      return { ...parameter, se, interval: [parameter.value - half * se, parameter.value + half * se] as const }
    }),
  }
}

import type { FitData, FitOptions, PooledSigma } from '../least-squares/fitModel'
import type { FitDone, FitOutcome } from '../least-squares/outcome'
import { withPooledSigma } from '../least-squares/pooled'
import { createSearches } from '../least-squares/varpro'
import type { Model } from '../models/define'
import { chi2UpperP } from '../statistics'
import { fitInNoise, SIGMA } from './noiseFloor'
import { fitRecovery, type RecoveryFit } from './polarity'

/** p of equal variances below which the noise is not taken to be the same in all tubes. */
const UNEQUAL_P = 0.001

/** Form in which the signals come: with their sign, as magnitudes that lost it, or as means of squared magnitudes. */
export type SignalForm = 'signed' | 'magnitude' | 'meanSquares'

export interface PooledNoise extends PooledSigma {
  /** Bartlett's p of equal variances; null with fewer than two tubes. */
  readonly equalVarianceP: number | null
}

export interface TubeFits {
  readonly tubes: readonly RecoveryFit[]
  /** The pool each tube's errors rest on, null where a tube stands on its own. */
  readonly pools: readonly (PooledNoise | null)[]
}

/**
 * Fits every tube of a series. Tubes sampled at the same times whose scatter is alike share one σ, which steadies the weights of the line through their
 * rates; tubes with a σ of their own, with points left out or sampled otherwise stand alone.
 * @param own options of single tubes (B1 scale, a known σ), by position
 */
export function fitTubes(model: Model, tubes: readonly FitData[], signal: SignalForm, options: FitOptions = {}, own: (k: number) => FitOptions = () => ({})): TubeFits {
  const searches = options.searches ?? createSearches()
  const fits = tubes.map((data, k) => fitOne(model, data, signal, { ...options, searches, ...own(k) }))
  const groups = new Map<string, number[]>()
  tubes.forEach((data, k) => {
    const { fit } = fits[k]!
    if (data.sigma || !fit.ok || fit.noInterval || fit.sigma === null || !(fit.sigma > 0)) return
    const key = [...data.x].sort((a, b) => a - b).join() + (data.exclude?.length ? `/${k}` : '')
    groups.set(key, [...groups.get(key) ?? [], k])
  })
  const pools = new Array<PooledNoise | null>(tubes.length).fill(null)
  for (const members of groups.values()) {
    const pool = poolNoise(members.map(k => fits[k]!.fit as FitDone))
    if (members.length < 2 || (pool.equalVarianceP ?? 1) < UNEQUAL_P) continue
    for (const k of members) pools[k] = pool
  }
  const pooled = (fit: FitOutcome, pool: PooledNoise) => fit.ok ? withPooledSigma(fit, pool) : fit
  return {
    pools,
    tubes: fits.map((tube, k) => {
      const pool = pools[k] ?? null
      return pool === null ? tube : { ...tube, fit: pooled(tube.fit, pool), alternative: tube.alternative && pooled(tube.alternative, pool) }
    }),
  }
}

function fitOne(model: Model, data: FitData, signal: SignalForm, options: FitOptions): RecoveryFit {
  if (!model.names.includes(SIGMA)) return fitRecovery(model, data, signal === 'magnitude' ? 'magnitude' : 'signed', options)
  return { ...fitInNoise(model, data, signal === 'meanSquares' ? 'meanSquares' : 'magnitudes', options), polarity: null, alternative: null }
}

/**
 * One standard deviation from the residuals of several fits, and Bartlett's test that they scatter alike.
 * @source Bartlett, Proc. R. Soc. Lond. A 160, 268 (1937)
 */
export function poolNoise(fits: readonly Pick<FitDone, 'rss' | 'dof'>[]): PooledNoise {
  const dof = fits.reduce((sum, fit) => sum + fit.dof, 0)
  const variance = fits.reduce((sum, fit) => sum + fit.rss, 0) / dof
  const k = fits.length
  if (k < 2) return { sigma: Math.sqrt(variance), dof, equalVarianceP: null }
  const spread = dof * Math.log(variance) - fits.reduce((sum, fit) => sum + fit.dof * Math.log(fit.rss / fit.dof), 0)
  const correction = 1 + (fits.reduce((sum, fit) => sum + 1 / fit.dof, 0) - 1 / dof) / (3 * (k - 1))
  return { sigma: Math.sqrt(variance), dof, equalVarianceP: chi2UpperP(Math.max(0, spread / correction), k - 1) }
}

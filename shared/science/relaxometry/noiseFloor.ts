import { parameterVector } from '../least-squares/derived'
import { fitModel, type FitData, type FitOptions } from '../least-squares/fitModel'
import type { FitDone, FitOutcome } from '../least-squares/outcome'
import type { Model } from '../models/define'
import { spreadOfMagnitude } from '../models/multiEchoNoise'

const REWEIGHTINGS = 3

export type NoisyForm = 'magnitudes' | 'meanSquares'

export interface NoisyFit {
  readonly fit: FitOutcome
  /** Relative standard deviations that the fit was weighted with, for whoever goes on with it (profile, bootstrap); null where it was unweighted. */
  readonly relativeSigma: readonly number[] | null
}
/** The parameter by which a model has noise in it. */
export const SIGMA = 'sigma_au'

/**
 * Fits region means or mean squares of magnitudes by a model with noise in it. Their scatter is not the same along the train, so they are weighted by what the
 * model says of it, A and σ taken from the fit before; only the ratios of the weights count, since how many pixels were averaged is not known. Points that
 * bring a σ of their own keep it. Where no noise is seen the fit is unweighted.
 * @source squares: Miller & Joseph, Magn. Reson. Imaging 11, 1051 (1993); magnitudes: second moment of Rice's distribution, Koay & Basser, J. Magn. Reson. 179, 317 (2006)
 */
export function fitInNoise(model: Model, data: FitData, form: NoisyForm, options: FitOptions): NoisyFit {
  let fit = withSeenFloor(model, data, fitModel(model, data, options), options)
  let relativeSigma: readonly number[] | null = null
  for (let turn = 0; turn < REWEIGHTINGS && fit.ok && !data.sigma; turn++) {
    const sigma = spreadAlong(model, data, fit, form, options)
    if (sigma === null) break
    relativeSigma = sigma
    const weighted: FitData = { ...data, sigma }
    fit = withSeenFloor(model, weighted, fitModel(model, weighted, { ...options, relativeSigma: true }), { ...options, relativeSigma: true })
  }
  return { fit, relativeSigma }
}

/** Standard deviation of one pixel at each point, by the model: √(4A²σ² + 4Nσ⁴) of a square, √(A² + 2σ² − S̄²) of a magnitude. */
function spreadAlong(model: Model, { x }: FitData, fit: FitDone, form: NoisyForm, { settings }: FitOptions): number[] | null {
  const values = Object.fromEntries(parameterVector(model, fit).map((value, j) => [model.names[j], value]))
  const noise = values[SIGMA] ?? 0
  if (!(noise > 0)) return null
  const channels = settings?.channels ?? 1
  return x.map((at) => {
    const clean = model.evaluate(at, { ...values, [SIGMA]: 0 }, settings)
    if (form === 'meanSquares') return Math.sqrt(4 * Math.max(0, clean) * noise ** 2 + 4 * channels * noise ** 4)
    return spreadOfMagnitude(clean, noise)
  })
}

/**
 * A noise that is not seen ends on its bound or where the signal no longer depends on it, and such a fit states no interval for anything. The decay then stands well above the floor: it is fitted again
 * with the noise held at 0, which is the plain decay.
 */
export function withSeenFloor(model: Model, data: FitData, fit: FitOutcome, options: FitOptions): FitOutcome {
  if (!fit.ok || !fit.parameters.some(one => one.name === SIGMA)) return fit
  const isUnseen = fit.parameters.some(one => one.name === SIGMA && one.atBound) || fit.noInterval?.reason === 'rankDeficient'
  if (!isUnseen) return fit
  return fitModel(model, data, { ...options, fixed: { ...options.fixed, [SIGMA]: 0 } })
}

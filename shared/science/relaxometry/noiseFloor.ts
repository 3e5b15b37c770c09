import { parameterVector } from '../least-squares/derived'
import { fitModel, type FitData, type FitOptions } from '../least-squares/fitModel'
import type { FitDone, FitOutcome } from '../least-squares/outcome'
import type { Model } from '../models/define'

const REWEIGHTINGS = 3

export interface MeanSquaresFit {
  readonly fit: FitOutcome
  /** Relative standard deviations that the fit was weighted with, for whoever goes on with it (profile, bootstrap); null where it was unweighted. */
  readonly relativeSigma: readonly number[] | null
}
const SIGMA = 'sigma_au'

/**
 * Fits means of squared magnitudes with weights 1/(4A²σ² + 4Nσ⁴), A and σ taken from the fit before; only the ratios of the weights count, since how many
 * pixels were averaged is not known. Where no noise is seen the fit is unweighted.
 * @source Miller & Joseph, Magn. Reson. Imaging 11, 1051 (1993)
 */
export function fitMeanSquares(model: Model, data: FitData, options: FitOptions): MeanSquaresFit {
  let fit = withSeenFloor(model, data, fitModel(model, data, options), options)
  let relativeSigma: readonly number[] | null = null
  for (let turn = 0; turn < REWEIGHTINGS && fit.ok; turn++) {
    const sigma = spreadOfSquares(model, data, fit, options)
    if (sigma === null) break
    relativeSigma = sigma
    const weighted: FitData = { ...data, sigma }
    fit = withSeenFloor(model, weighted, fitModel(model, weighted, { ...options, relativeSigma: true }), { ...options, relativeSigma: true })
  }
  return { fit, relativeSigma }
}

function spreadOfSquares(model: Model, { x }: FitData, fit: FitDone, { settings }: FitOptions): number[] | null {
  const values = Object.fromEntries(parameterVector(model, fit).map((value, j) => [model.names[j], value]))
  const noise = values[SIGMA] ?? 0
  if (!(noise > 0)) return null
  const channels = settings?.channels ?? 1
  const amplitudes = x.map(at => model.evaluate(at, { ...values, [SIGMA]: 0 }, settings))
  return amplitudes.map(square => Math.sqrt(4 * Math.max(0, square) * noise ** 2 + 4 * channels * noise ** 4))
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

import type { FitData } from '../../science/least-squares/fitModel'
import type { FitDone } from '../../science/least-squares/outcome'
import type { Conditions, SeriesTube } from '../types'

/** SD of Rayleigh's distribution in units of σ, √(2 − π/2): what the SD of magnitudes in air is to the noise of one channel. */
export const RAYLEIGH_SD = Math.sqrt(2 - Math.PI / 2)

/** A column of a tube's points, by field; null where the tube has none. */
export function columnOf(tube: SeriesTube, field: string): (number | null)[] | null {
  const at = tube.points.columns.indexOf(field)
  return at < 0 ? null : tube.points.rows.map(row => row[at] ?? null)
}

const isComplete = (values: (number | null)[] | null): values is number[] => values !== null && values.length > 0 && values.every(value => value !== null && value > 0)

export interface PointNoise {
  /** Standard deviation of each point, or of all; null = not known. */
  sigma: number | number[] | null
  source: string | null
}

/** Standard deviations of the means: given with each point, from the region's pixels, or the noise measured; null where none is known for every point. */
export function pointNoise(tube: SeriesTube, { noiseSigma_au }: Conditions): PointNoise {
  const own = columnOf(tube, 'signalSd_au')
  if (isComplete(own)) return { sigma: own, source: 'given with each point' }
  const [spread, pixels] = [columnOf(tube, 'regionSd_au'), columnOf(tube, 'pixels')]
  if (isComplete(spread) && isComplete(pixels)) return { sigma: spread.map((sd, i) => sd / Math.sqrt(pixels[i] ?? 1)), source: 'from the region\'s pixels' }
  return typeof noiseSigma_au === 'number' ? { sigma: noiseSigma_au, source: 'measured noise' } : { sigma: null, source: null }
}

/** Noise of one pixel in one channel, from the background; null where it was not measured. */
export function pixelSigma({ noiseBackgroundSd_au }: Conditions): number | null {
  return typeof noiseBackgroundSd_au === 'number' ? noiseBackgroundSd_au / RAYLEIGH_SD : null
}

/** Size of the noise that a signal is held against, with its source; null where neither is above 0. */
export function noiseOf(fit: FitDone, { sigma }: FitData, { source, isPooled, pixel_au }: { source: string | null, isPooled: boolean, pixel_au: number | null }): { sigma_au: number, source: string } | null {
  if (pixel_au !== null) return { sigma_au: pixel_au, source: 'one pixel, from the background' }
  const size = typeof sigma === 'number' ? sigma : sigma && source !== null ? Math.max(...sigma) : fit.sigma
  if (size === null || !(size > 0)) return null
  return { sigma_au: size, source: source ?? (isPooled ? 'pooled over the tubes' : 'from the scatter about the fit') }
}

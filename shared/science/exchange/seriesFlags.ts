import { ppmToRadPerS } from './poolSystem'
import { b1Of, systemOf, type SeriesLayout } from './seriesLayout'
import type { UsedSpectrum } from './seriesProblem'
import { omega1_rad_per_s, saturationEfficiency } from './transferForms'

/** Something that a reader must know before believing a pool. */
export interface SeriesFlag {
  readonly id: 'outsideOffsets' | 'coarseOffsets' | 'b1BelowExchange' | 'startsDiffer'
  /** Label of the pool; null for the whole fit. */
  readonly of: string | null
  readonly message: string
}

/** Points a line must have across its width. */
const POINTS_A_WIDTH = 3

/** What the fitted pools ask of the spectra and do not find there. @param outer value of every coordinate */
export function seriesFlags(layout: SeriesLayout, spectra: readonly UsedSpectrum[], outer: ArrayLike<number>, starts: { readonly tried: number, readonly agree: number }): SeriesFlag[] {
  const perPpm = ppmToRadPerS(layout.model.field_T)
  const flags: SeriesFlag[] = []
  layout.model.pools.forEach(({ label }, p) => {
    const seen = spectra.filter(one => layout.tubes[one.spectrum.tube]!.conc_mM > 0).map((one) => {
      const system = systemOf(layout, one.spectrum.tube, outer)
      const { shift_ppm: shift, exchange_per_s: k, rate2_per_s: r2 } = system.solutes[p]!
      const b1_uT = b1Of(one.spectrum, layout.tubes)
      const width_ppm = 2 * Math.sqrt((omega1_rad_per_s(b1_uT) ** 2 * (k + r2)) / k + (k + r2) ** 2) / perPpm
      return { gap: gapAround(one.offsets_ppm, shift + (system.waterShift_ppm ?? 0)), width_ppm, alpha: saturationEfficiency(k, { b1_uT, r2s_per_s: r2 }) }
    })
    const bracketed = seen.flatMap(({ gap, width_ppm }) => gap === null ? [] : [gap / width_ppm])
    if (bracketed.length === 0) flags.push({ id: 'outsideOffsets', of: label, message: `No spectrum has offsets on both sides of ${label}: its place and rate rest on its wing.` })
    else if (Math.min(...bracketed) > 1 / POINTS_A_WIDTH) flags.push({ id: 'coarseOffsets', of: label, message: `The offsets at ${label} are farther apart than a third of its width in every spectrum.` })
    if (Math.max(...seen.map(one => one.alpha)) < 0.5) flags.push({ id: 'b1BelowExchange', of: label, message: `No B1 saturates ${label} to a half: its rate and its amount are hardly told apart.` })
  })
  if (starts.agree < starts.tried) flags.push({ id: 'startsDiffer', of: null, message: `Of ${starts.tried} searches ${starts.agree} reached the lowest sum of squares: there are other minima.` })
  return flags
}

/** Distance of the two offsets next to a place; null where it lies outside them. */
function gapAround(offsets_ppm: Float64Array, place: number): number | null {
  let [below, above] = [-Infinity, Infinity]
  for (const offset of offsets_ppm) {
    if (offset <= place && offset > below) below = offset
    if (offset >= place && offset < above) above = offset
  }
  // An offset at the place itself: the wider of the gaps beside it is what counts.
  if (below === above) {
    let [left, right] = [-Infinity, Infinity]
    for (const offset of offsets_ppm) {
      if (offset < place && offset > left) left = offset
      if (offset > place && offset < right) right = offset
    }
    return left > -Infinity && right < Infinity ? Math.max(place - left, right - place) : null
  }
  return below > -Infinity && above < Infinity ? above - below : null
}

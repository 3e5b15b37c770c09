import { faultOfBlock } from './poolSystem'
import { refuseExchange, type ExchangeRefusal } from './refusal'
import { b1Of, type SeriesLayout } from './seriesLayout'
import type { Quantity, SeriesSpectrum, SeriesTube } from './seriesTypes'
import { MOST_SOLUTES } from './kernels'

/** Z above which there is signal at all. */
const SOME_SIGNAL = 0.05

/** What no choice of parameters could mend, with the place and what would be accepted; null when nothing. */
export function findSeriesProblem(layout: SeriesLayout, spectra: readonly SeriesSpectrum[]): ExchangeRefusal | null {
  const { model, tubes } = layout
  if (!(model.field_T > 0 && model.field_T < Infinity)) return refuseExchange('badField', `The field is ${model.field_T} T.`, 'A field above 0 T.')
  if (model.pools.length < 1 || model.pools.length > MOST_SOLUTES) return refuseExchange('badPools', `${model.pools.length} pools stand beside water.`, `1 to ${MOST_SOLUTES} pools.`)
  return firstOf(layout.slots, slot => quantityProblem(`${slot.name} of ${slot.of}`, slot.quantity, { isPositive: slot.isLog && slot.name !== 'exchange_per_s' && slot.name !== 'ratio_per_mM', isSigned: !slot.isLog, tubes: tubes.length, min: slot.min, max: slot.max }))
    ?? firstOf(tubes, tubeProblem)
    ?? (spectra.length === 0 ? refuseExchange('noSpectra', 'There is no spectrum.', 'At least one spectrum.') : null)
    ?? firstOf(spectra, (one, i) => spectrumProblem(one, i, tubes))
    ?? (spectra.some(one => (one.sigma == null) !== (spectra[0]!.sigma == null)) ? refuseExchange('badSigma', 'Some spectra have a standard deviation and others none.', 'One for every spectrum, or none.') : null)
    ?? firstOf(tubes, (_, t) => spectra.some(one => one.tube === t) ? null : refuseExchange('unusedTube', `Tube ${t + 1} has no spectrum.`, 'A spectrum for every tube, or the tube left out.'))
    ?? (tubes.every(tube => tube.conc_mM === 0) ? refuseExchange('noAgent', 'No tube holds agent.', 'At least one tube with a concentration above 0 mM.') : null)
    ?? (spectra.every(one => one.z.every(z => z < SOME_SIGNAL)) ? refuseExchange('saturated', `Every point lies below ${SOME_SIGNAL}: the spectra are saturated throughout.`, 'A lower B1, a shorter saturation or offsets farther out.') : null)
}

function firstOf<T>(items: readonly T[], check: (item: T, i: number) => ExchangeRefusal | null): ExchangeRefusal | null {
  for (const [i, item] of items.entries()) {
    const found = check(item, i)
    if (found) return found
  }
  return null
}

function quantityProblem(name: string, quantity: Quantity, { isPositive, isSigned, tubes, min, max }: { isPositive: boolean, isSigned: boolean, tubes: number, min: number, max: number }): ExchangeRefusal | null {
  if (quantity.kind === 'held') {
    const values = typeof quantity.value === 'number' ? [quantity.value] : quantity.value
    if (typeof quantity.value !== 'number' && values.length !== tubes) return refuseExchange('lengthMismatch', `${name}: ${values.length} values stand against ${tubes} tubes.`, 'One value, or one for each tube.')
    const bad = values.find(x => !Number.isFinite(x) || (!isSigned && (isPositive ? !(x > 0) : !(x >= 0))))
    if (bad !== undefined) return refuseExchange('badValue', `${name} is held at ${bad}.`, isSigned ? 'A number.' : isPositive ? 'A number above 0.' : 'A number not below 0.')
    return quantity.se != null && !(quantity.se >= 0 && quantity.se < Infinity) ? refuseExchange('badValue', `${name} has the standard error ${quantity.se}.`, 'A standard error not below 0.') : null
  }
  const low = quantity.min ?? min
  const high = quantity.max ?? max
  if (!(low < high) || (!isSigned && !(low > 0))) return refuseExchange('badBounds', `${name} is bound by ${low} and ${high}.`, `A lower bound${isSigned ? '' : ' above 0'} below the upper one.`)
  const { start } = quantity
  return start !== undefined && !(start >= low && start <= high) ? refuseExchange('badStart', `${name} starts at ${start}, outside ${low} to ${high}.`, 'A start between the bounds.') : null
}

function tubeProblem({ conc_mM: conc, b1Scale = 1, b1Se_frac: se }: SeriesTube, i: number): ExchangeRefusal | null {
  if (!(conc >= 0 && conc < Infinity)) return refuseExchange('badConcentration', `Tube ${i + 1} has a concentration of ${conc} mM.`, 'A concentration not below 0 mM.')
  if (!(b1Scale > 0 && b1Scale < Infinity)) return refuseExchange('badB1', `Tube ${i + 1} has a B1 scale of ${b1Scale}.`, 'A scale above 0.')
  return se != null && !(se >= 0 && se < 1) ? refuseExchange('badB1', `Tube ${i + 1} has a B1 error of ${se}.`, 'A fraction from 0 to 1.') : null
}

function spectrumProblem(one: SeriesSpectrum, i: number, tubes: readonly SeriesTube[]): ExchangeRefusal | null {
  const where = `Spectrum ${i + 1}`
  if (!tubes[one.tube]) return refuseExchange('badTube', `${where} names tube ${one.tube + 1}, which does not exist.`, `Tubes 1 to ${tubes.length}.`)
  if (one.offsets_ppm.length !== one.z.length) return refuseExchange('lengthMismatch', `${where}: ${one.offsets_ppm.length} offsets stand against ${one.z.length} values of Z.`, 'One Z for each offset.')
  if (one.sigma != null && typeof one.sigma !== 'number' && one.sigma.length !== one.z.length) return refuseExchange('lengthMismatch', `${where}: ${one.sigma.length} standard deviations stand against ${one.z.length} points.`, 'One for each point, or one for all.')
  const fault = faultOfBlock({ ...one, b1_uT: b1Of(one, tubes) })
  if (fault !== null) return refuseExchange('badBlock', `${where}: ${fault}`, 'B1, saturation time and start inside their domain.')
  if (one.b1_uT === 0) return refuseExchange('noB1', `${where} has a B1 of 0 µT, so it says nothing of exchange.`, 'A B1 above 0 µT, or the spectrum left out.')
  const left = new Set(one.exclude ?? [])
  // The fitted spectrum is shown at every offset, so each must be a number; Z only where it is used.
  const bad = one.z.findIndex((z, k) => (!left.has(k) && !Number.isFinite(z)) || !Number.isFinite(one.offsets_ppm[k]))
  if (bad >= 0) return refuseExchange('notFinite', `${where}, point ${bad + 1}: the offset or Z is not a number.`, 'Finite numbers, or the point left out.')
  const sigmas = one.sigma == null ? [] : typeof one.sigma === 'number' ? [one.sigma] : one.sigma
  return sigmas.some((s, k) => !left.has(k) && !(s > 0 && s < Infinity)) ? refuseExchange('badSigma', `${where} has a standard deviation that is not above 0.`, 'A standard deviation above 0 for every point.') : null
}

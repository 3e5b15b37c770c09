import { fitSeries } from '../../science/exchange/fitSeries'
import { refuseExchange } from '../../science/exchange/refusal'
import { conditionFlags } from '../../science/exchange/rateFlags'
import type { ExchangeFlag, ExpectedPool } from '../../science/exchange/spectrumFlags'
import type { Quantity, SeriesFitDone, SeriesParameter, SeriesPool, SeriesSpectrum } from '../../science/exchange/seriesTypes'
import { WATER_M } from '../../science/exchange/transferForms'
import type { DrawnPoint, MethodOutcome } from './methods'
import type { Sample } from './samples'

const held = (value: number | readonly number[], se?: number | null): Quantity => ({ kind: 'held', value, se: se ?? null })
const POOL = 'pool'
/** R2 of a pool where nothing is known of it: too small to act, and the equations ask for one above 0. */
const NEGLECTED_per_s = 1e-3

/** More than the fit needs by itself: a second pool can be far from where it starts. */
const MOST_EVALUATIONS = 200

/**
 * Exchange rate by the Bloch–McConnell equations through every point of all spectra of samples at one pH and temperature: shift, rate and protons of the pool and R2 of water are shared; R1w is held
 * where it is known. Spectra are centred on water first, and its position is held there with its error.
 * @param solutes pools beside water: 1, or 2 with a second one that the fit places by itself
 */
export function byGlobalFit(samples: readonly Sample[], pool: ExpectedPool, { field_T, solutes, protons }: { field_T: number, solutes: 1 | 2, protons: number | null }): MethodOutcome {
  const scans = samples.flatMap((sample, tube) => sample.scans.map(one => ({ one, tube, sample })))
  if (scans.length === 0) return refuseExchange('noSpectra', 'No spectrum could be normalised.', 'Spectra with S0.')
  const [first] = samples as [Sample]
  const r1ws = samples.map(one => one.r1w)
  const isKnown = r1ws.every(one => one !== null)
  const haveNoise = scans.every(({ one }) => one.centred.zSe !== null)
  const model = {
    field_T, pools: [poolOf(POOL, pool, first.r2s_per_s), ...(solutes === 2 ? [secondPool(pool)] : [])],
    water: {
      rate1_per_s: isKnown ? held(r1ws.map(one => one!.value), Math.max(...r1ws.map(one => one!.se ?? 0))) : { kind: 'fitted' as const }, rate2_per_s: { kind: 'fitted' as const },
      shift_ppm: held(0, Math.max(...scans.map(({ one }) => one.shift.se_ppm ?? 0))),
    },
  }
  const spectra = scans.map(({ one, tube, sample }): SeriesSpectrum => ({
    tube, b1_uT: one.scan.b1_uT, duration_s: one.scan.tsat_s, initial_frac: sample.start, offsets_ppm: one.centred.offset_ppm, z: one.centred.z, sigma: haveNoise ? one.centred.zSe : null,
  }))
  const fit = fitSeries(model, samples.map(one => ({ conc_mM: one.conc_mM, b1Se_frac: one.facts.b1Se_frac })), spectra, { maxEvaluations: MOST_EVALUATIONS })
  if (!fit.ok) return fit
  const k = of(fit, 'exchange_per_s')
  if (!fit.converged) return refuseExchange('noMinimum', `The global fit did not settle (${fit.stop}).`, 'Fewer pools, or spectra that show the pool at more B1.')
  const b1 = fit.carried.filter(one => /b1/i.test(one.source)).map(one => one.change[fit.parameters.indexOf(k)]!)
  return {
    ok: true, k_per_s: { value: k.value, se: k.se, interval: k.interval }, b1Se_per_s: Math.hypot(...b1), protonRatio: protons === null ? null : ratioOf(of(fit, 'ratio_per_mM'), protons),
    assumptions: fit.assumptions, flags: flagsOf(fit, k, samples, scans.map(({ one }) => one.scan)), line: [],
    points: scans.map(({ one }, s): DrawnPoint => {
      const at = nearest(one.centred.offset_ppm, pool.offset_ppm)
      return { tubeNo: one.scan.tube.tubeNo, label: `${one.scan.tube.label}, ${one.scan.nominalB1_uT} µT, ${one.scan.tsat_s} s`, x: one.scan.b1_uT, y: one.centred.z[at]!, ySe: one.centred.zSe?.[at] ?? null, fitted: fit.fitted[s]![at]! }
    }),
    axes: { x: { label: 'B_1', unit: 'µT', scale: 'linear' }, y: { label: 'Z at the pool', unit: null, scale: 'linear' } },
  }
}

function poolOf(label: string, { offset_ppm, width_ppm }: ExpectedPool, r2s_per_s: number | null): SeriesPool {
  return { label, shift_ppm: { kind: 'fitted', min: offset_ppm - width_ppm, max: offset_ppm + width_ppm }, exchange_per_s: { kind: 'fitted' }, rate1_per_s: held(1), rate2_per_s: held(Math.max(r2s_per_s ?? 0, NEGLECTED_per_s)), ratio_per_mM: { kind: 'fitted' } }
}

/** A pool anywhere between the first and its mirror image: two pools that may change places have no errors. */
function secondPool({ offset_ppm, width_ppm }: ExpectedPool): SeriesPool {
  const [near, far] = [Math.abs(offset_ppm) - width_ppm, -Math.abs(offset_ppm) - 2 * width_ppm]
  const [min, max] = offset_ppm > 0 ? [far, near] : [-near, -far]
  return { label: 'second pool', shift_ppm: { kind: 'fitted', min, max }, exchange_per_s: { kind: 'fitted' }, rate1_per_s: held(1), rate2_per_s: held(NEGLECTED_per_s), ratio_per_mM: { kind: 'fitted' } }
}

const of = ({ parameters }: SeriesFitDone, name: string): SeriesParameter => parameters.find(one => one.of === POOL && one.name === name)!

function ratioOf({ value, se }: SeriesParameter, protons: number) {
  const typed = protons / (2000 * WATER_M)
  return { value: value / typed, se: se === null ? null : se / typed }
}

function nearest(offsets: readonly number[], at: number): number {
  return offsets.reduce((best, one, i) => Math.abs(one - at) < Math.abs(offsets[best]! - at) ? i : best, 0)
}

function flagsOf(fit: SeriesFitDone, k: SeriesParameter, samples: readonly Sample[], scans: readonly { b1_uT: number, tsat_s: number }[]): ExchangeFlag[] {
  const flags = conditionFlags(k.value, { b1s_uT: scans.map(one => one.b1_uT), tsat_s: scans.map(one => one.tsat_s), r1w_per_s: samples[0]!.r1w?.value ?? null, r2s_per_s: samples[0]!.r2s_per_s, opposite: null }, { steady: false, overB1: true })
  const { noInterval, reducedChi2, starts } = fit
  if (noInterval !== null) flags.push({ id: 'noInterval', title: 'No error stated', sentence: noInterval.message })
  if (reducedChi2 !== null && reducedChi2 > 4) flags.push({ id: 'modelMisfit', title: 'The model does not describe the spectra', sentence: `Residuals are ${Math.sqrt(reducedChi2).toPrecision(2)} times the noise: another pool, a pulse train, or B1 that varies over the region. Look at the residuals, and try one more pool.` })
  if (starts.tried > 1 && starts.agree < 2) flags.push({ id: 'oneStart', title: 'Starts disagree', sentence: `Only ${starts.agree} of ${starts.tried} starts reached the lowest sum of squares: other minima lie near. Compare with the other methods.` })
  return flags
}

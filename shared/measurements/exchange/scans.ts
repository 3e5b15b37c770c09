import { PROTON_GAMMA_MHz_per_T } from '../../science/constants'
import type { RawSpectrum, S0Reading } from '../../science/exchange/normalise'
import { columnOf } from '../relaxation/noise'
import { leftOutOf } from '../relaxation/exclusions'
import type { AnalysisInput, Conditions, SeriesTube } from '../types'

/** One reading as stored, in the order of the file, which is that of acquisition. */
export interface Reading { readonly index: number, readonly offset_ppm: number, readonly signal_au: number, readonly sd_au: number | null, readonly b1_uT: number | null, readonly tsat_s: number | null, readonly isS0: boolean, readonly excluded: string | null }

/** A spectrum: readings of one tube at one B1 and saturation time, with the S0 that belongs to it. */
export interface Scan {
  readonly tube: SeriesTube
  /** As set. */
  readonly nominalB1_uT: number
  /** As it was: nominal times the scale of the tube. */
  readonly b1_uT: number
  readonly tsat_s: number
  readonly readings: readonly Reading[]
  readonly raw: RawSpectrum
  /** A weak saturation that finds the water shift. */
  readonly isWaterScan: boolean
}

/** What a tube is, beside its spectra. */
export interface TubeFacts { readonly pH: number | null, readonly temperature_K: number | null, readonly r1w_per_s: number | null, readonly b1Scale: number, readonly b1Se_frac: number }

export const numberOr = (value: unknown): number | null => typeof value === 'number' ? value : null
const first = (tube: SeriesTube, field: string): number | null => columnOf(tube, field)?.find(value => value !== null) ?? null

export function factsOf(tube: SeriesTube, conditions: Conditions): TubeFacts {
  const of = (field: string, key: string) => first(tube, field) ?? numberOr(conditions[key])
  return { pH: of('pH', 'pH'), temperature_K: of('temperature_K', 'temperature_K'), r1w_per_s: of('r1w_per_s', 'r1w_per_s'), b1Scale: first(tube, 'b1Scale') ?? 1, b1Se_frac: of('b1Se_frac', 'b1Error_frac') ?? 0 }
}

/** Megahertz of the proton at the field of the conditions: hertz over it are ppm. NaN without a field. */
export const protonMHz = (conditions: Conditions): number => (numberOr(conditions.b0_T) ?? NaN) * PROTON_GAMMA_MHz_per_T

export function readingsOf(tube: SeriesTube, conditions: Conditions, exclusions: AnalysisInput['exclusions'] = []): Reading[] {
  const left = leftOutOf(tube, exclusions)
  const [ppm, hertz, signal, sd, b1, tsat] = ['offset_ppm', 'offset_Hz', 'signal_au', 'signalSd_au', 'b1_uT', 'tsat_s'].map(field => columnOf(tube, field))
  const [allB1, allTsat, far, perPpm] = [numberOr(conditions.b1_uT), numberOr(conditions.tsat_s), numberOr(conditions.s0From_ppm), protonMHz(conditions)]
  return tube.points.rows.map((_, index) => {
    const offset_ppm = ppm ? ppm[index] ?? NaN : (hertz?.[index] ?? NaN) / perPpm
    const own = b1?.[index] ?? allB1
    const isS0 = own === 0 || (far !== null && Math.abs(offset_ppm) >= far)
    return { index, offset_ppm, signal_au: signal?.[index] ?? NaN, sd_au: sd?.[index] ?? null, b1_uT: own, tsat_s: tsat?.[index] ?? allTsat, isS0, excluded: left.tube ?? left.points.get(index) ?? null }
  })
}

/** The spectra of one tube, by B1 and saturation time, in the order in which they begin. Readings left out take no part. */
export function scansOf(tube: SeriesTube, conditions: Conditions, exclusions: AnalysisInput['exclusions'] = []): Scan[] {
  const used = readingsOf(tube, conditions, exclusions).filter(one => one.excluded === null)
  const { b1Scale } = factsOf(tube, conditions)
  const weak = numberOr(conditions.wassrB1_uT)
  const groups = new Map<string, Reading[]>()
  for (const one of used.filter(reading => !reading.isS0 && reading.b1_uT !== null && reading.tsat_s !== null)) {
    const key = `${one.b1_uT}|${one.tsat_s}`
    groups.set(key, [...groups.get(key) ?? [], one])
  }
  return [...groups.values()].map((readings) => {
    const nominal = readings[0]!.b1_uT!
    const tsat_s = readings[0]!.tsat_s!
    const sds = readings.flatMap(one => one.sd_au ?? [])
    return {
      tube, nominalB1_uT: nominal, b1_uT: nominal * b1Scale, tsat_s, readings, isWaterScan: weak !== null && nominal <= weak * (1 + 1e-9),
      raw: {
        offset_ppm: readings.map(one => one.offset_ppm), signal_au: readings.map(one => one.signal_au), order: readings.map(one => one.index),
        s0: [...s0InRows(used, readings, tsat_s), ...s0InCells(tube, readings)], sd_au: sds.length === readings.length ? Math.sqrt(sds.reduce((sum, sd) => sum + sd * sd, 0) / sds.length) : null,
      },
    }
  })
}

/** Readings of S0 inside a spectrum, and the nearest run of them before and after; those at the same saturation time where there are any. */
function s0InRows(used: readonly Reading[], readings: readonly Reading[], tsat_s: number): S0Reading[] {
  const all = used.filter(one => one.isS0)
  const alike = all.filter(one => one.tsat_s === tsat_s)
  const candidates = alike.length > 0 ? alike : all
  const [from, to] = [readings[0]!.index, readings.at(-1)!.index]
  const runs: Reading[][] = []
  for (const one of candidates) {
    const last = runs.at(-1)
    const isNext = last && !used.some(other => !other.isS0 && other.index > last.at(-1)!.index && other.index < one.index)
    if (isNext) last.push(one)
    else runs.push([one])
  }
  const before = runs.filter(run => run[0]!.index < from).at(-1)
  const after = runs.find(run => run[0]!.index > to)
  const chosen = [...before ? [before] : [], ...runs.filter(run => run[0]!.index > from && run[0]!.index < to), ...after ? [after] : []]
  return chosen.flat().map(one => ({ signal_au: one.signal_au, order: one.index }))
}

/** S0 from columns of its own: a new reading wherever the number changes, and the one after the spectrum. */
function s0InCells(tube: SeriesTube, readings: readonly Reading[]): S0Reading[] {
  const [before, after] = [columnOf(tube, 's0_au'), columnOf(tube, 's0After_au')]
  const found: S0Reading[] = []
  for (const { index } of readings) {
    const value = before?.[index] ?? null
    if (value !== null && value !== found.at(-1)?.signal_au) found.push({ signal_au: value, order: index - 0.5 })
  }
  const last = readings.at(-1)!.index
  const end = after?.[last] ?? null
  return end === null ? found : [...found, { signal_au: end, order: last + 0.5 }]
}

import { protonFraction } from '#shared/science/exchange/transferForms'
import { createRandom } from '#shared/science/random'
import { range, zOf, type Saturation, type TestPool } from './zSpectra'

export const Z_LINES = ['Field: 7 T', 'Temperature: 25.0 °C', 'pH: 7.4', 'Medium: buffer', 'Pool offset: 50 ppm', 'Pool width: 4 ppm', 'Exchanging protons: 2', 'R1w: 0.4', 'R2 of the pool: 50', 'S0 from: 300 ppm']
export const B1S_uT = [1.5, 2.5, 4, 6, 9, 12]
export const OFFSETS_ppm = [...range(-90, -60, 10), ...range(-56, -53, 1), ...range(-52, -48, 0.25), ...range(-47, -44, 1), -30, -20, -10, ...range(-5, 5, 0.5), 10, 20, 30, ...range(44, 47, 1), ...range(48, 52, 0.25), ...range(53, 56, 1), ...range(60, 90, 10)]

export interface SpectraPlan { k_per_s: number, conc_mM?: number, pH?: number, b1s_uT?: readonly number[], tsats_s?: readonly number[], offsets_ppm?: readonly number[], shift_ppm?: number, noise?: number, name?: string, seed?: string, drift?: number, more?: readonly TestPool[] }

export interface SimulatedReading { name: string, conc_mM: number, pH: number | null, b1_uT: number, tsat_s: number, offset_ppm: number, signal: number }

const known = new Map<string, number>()

/** The same spectra serve many tests. */
function zOnce(pools: readonly TestPool[], saturation: Saturation, offset_ppm: number): number {
  const key = JSON.stringify([pools, saturation, offset_ppm])
  const z = known.get(key) ?? zOf(pools, saturation, offset_ppm)
  known.set(key, z)
  return z
}

/** Readings of one tube in the order of a scan: two S0 at −300 ppm, the spectrum, two at +300 ppm, at every B1 and saturation time. S0 is 1000 and drifts along the tube. */
export function simulate({ k_per_s, conc_mM = 20, pH, b1s_uT = B1S_uT, tsats_s = [15], offsets_ppm = OFFSETS_ppm, shift_ppm = 0.15, noise = 0.002, name = 't1', seed = 'spectra', drift = 0, more = [] }: SpectraPlan): SimulatedReading[] {
  const random = createRandom(`${seed} ${name}`)
  const pools: TestPool[] = [
    { offset_ppm: shift_ppm, fraction: 1, k_per_s: 0, rate1_per_s: 0.4, rate2_per_s: 3 },
    { offset_ppm: 50 + shift_ppm, fraction: protonFraction(2, conc_mM), k_per_s, rate1_per_s: 1, rate2_per_s: 50 },
    ...more,
  ]
  const plan = b1s_uT.flatMap(b1_uT => tsats_s.flatMap(tsat_s => [-300, -300, ...offsets_ppm, 300, 300].map(offset_ppm => ({ b1_uT, tsat_s, offset_ppm }))))
  return plan.map((one, i) => {
    const z = Math.abs(one.offset_ppm) === 300 ? 1 : zOnce(pools, { b0_T: 7, b1_uT: one.b1_uT, tsat_s: one.tsat_s }, one.offset_ppm)
    return { name, conc_mM, pH: pH ?? null, ...one, signal: Number(Math.abs(1000 * (1 + (drift * i) / plan.length) * (z + noise * random.normal())).toFixed(4)) }
  })
}

/** A row per reading. @param unit the offsets are written in; Hz at 7 T */
export function longTable(readings: readonly SimulatedReading[], { lines = Z_LINES, unit = 'ppm' }: { lines?: readonly string[], unit?: 'ppm' | 'Hz' } = {}): string[] {
  const perPpm = 7 * 42.577478518
  const written = (offset: number) => unit === 'ppm' ? offset : Number((offset * perPpm).toFixed(6))
  const hasPH = readings.some(one => one.pH !== null)
  return [
    ...lines, '', `tube,conc (mM),${hasPH ? 'pH,' : ''}B1 (µT),saturation time (s),offset (${unit}),signal`,
    ...readings.map(one => [one.name, one.conc_mM, ...(hasPH ? [one.pH] : []), one.b1_uT, one.tsat_s, written(one.offset_ppm), one.signal].join(',')),
  ]
}

/** A column per spectrum; all at the same offsets. */
export function wideTable(readings: readonly SimulatedReading[], lines: readonly string[] = Z_LINES): string[] {
  const keys = [...new Set(readings.map(one => `${one.name}|${one.b1_uT}|${one.tsat_s}`))]
  const columns = keys.map(key => readings.filter(one => `${one.name}|${one.b1_uT}|${one.tsat_s}` === key))
  const row = (label: string, of: (one: SimulatedReading) => number | string) => [label, ...columns.map(column => of(column[0]!))].join(',')
  return [
    ...lines, '', row('Concentration (mM)', one => one.conc_mM), row('B1 (µT)', one => one.b1_uT), row('Saturation time (s)', one => one.tsat_s),
    row('Offset (ppm)', one => `${one.name} ${one.b1_uT} uT ${one.tsat_s} s`), ...columns[0]!.map((first, i) => [first.offset_ppm, ...columns.map(column => column[i]!.signal)].join(',')),
  ]
}

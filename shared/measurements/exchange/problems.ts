import { suspectOffsetUnit } from '../../science/exchange/spectrumFlags'
import { columnOf } from '../relaxation/noise'
import { asks, blocks, quoted } from '../tabular/problem'
import type { Conditions, SeriesTube, UploadProblem } from '../types'
import { poolOf } from './samples'
import { numberOr, protonMHz, readingsOf, scansOf, type Reading } from './scans'

/** What keeps the spectra of a series from being read, and what a person should look at first. */
export function spectrumProblems(tubes: readonly SeriesTube[], conditions: Conditions): UploadProblem[] {
  return tubes.filter(tube => tube.role === 'sample' && tube.points.rows.length > 0).flatMap((tube) => {
    const at = { field: `tubes.${tube.tubeNo}` }
    const name = `Tube ${quoted(tube.label)}`
    const readings = readingsOf(tube, conditions)
    const unit = unitProblem(tube, conditions, name)
    if (unit) return [unit]
    const missing = saturationProblems(readings, name)
    if (missing.length > 0) return missing
    const scans = scansOf(tube, conditions)
    if (scans.length === 0) return [blocks('noSaturation', `${name}: every reading is S0 (B1 of 0, or a far offset).`, 'readings with saturation at offsets around the pool', at)]
    const spectra = scans.filter(one => !one.isWaterScan)
    const withoutS0 = spectra.filter(one => one.raw.s0.length === 0)
    if (withoutS0.length > 0) return [blocks('noS0', `${name} has no reading of S0${withoutS0.length < spectra.length ? ` for ${withoutS0[0]!.nominalB1_uT} µT, ${withoutS0[0]!.tsat_s} s` : ''}: nothing says what 100 % is.`, 'rows with B1 of 0, the offset from which on readings are S0, or a column S0', at)]
    return spectra.flatMap(one => rangeProblems(one.raw.offset_ppm, conditions, `${name}${spectra.length > 1 ? `, ${one.nominalB1_uT} µT` : ''}`, at))
  })
}

function unitProblem(tube: SeriesTube, conditions: Conditions, name: string): UploadProblem | null {
  const frequency = protonMHz(conditions)
  const far = numberOr(conditions.s0From_ppm) ?? Infinity
  const inHz = columnOf(tube, 'offset_Hz')
  const offsets = (inHz ?? columnOf(tube, 'offset_ppm') ?? []).filter(one => one !== null)
  // far S0 readings say nothing of the unit
  const spectrum = inHz ? offsets : offsets.filter(one => Math.abs(one) < far)
  if (spectrum.length === 0 || !(frequency > 0)) return null
  const doubt = suspectOffsetUnit(spectrum, inHz ? 'Hz' : 'ppm', frequency)
  const reach = Math.max(...spectrum.map(Math.abs))
  const pool = Math.abs(poolOf(conditions).offset_ppm)
  const short = inHz && reach / frequency < pool && reach >= pool ? `The offsets reach ${Number(reach.toPrecision(4))} Hz, ${(reach / frequency).toPrecision(2)} ppm, short of the pool at ${pool} ppm; as ppm they would reach it.` : null
  const sentence = doubt?.sentence ?? short
  return sentence === null ? null : asks('offsetUnit', `${name}: ${sentence}`, 'the unit of the offsets: ppm or Hz', { field: 'columns.offset' })
}

function saturationProblems(readings: readonly Reading[], name: string): UploadProblem[] {
  const saturated = readings.filter(one => !one.isS0)
  return [
    ...(saturated.some(one => one.b1_uT === null) ? [blocks('noB1', `${name}: nothing says at which B1 it was saturated.`, 'a column or a row B1 (µT), or the B1 of all spectra', { field: 'conditions.b1_uT' })] : []),
    ...(saturated.some(one => one.tsat_s === null) ? [blocks('noTsat', `${name}: nothing says how long it was saturated.`, 'a column or a row of saturation times, or that of all spectra', { field: 'conditions.tsat_s' })] : []),
  ]
}

function rangeProblems(offsets: readonly number[], conditions: Conditions, name: string, at: { field: string }): UploadProblem[] {
  const pool = poolOf(conditions)
  const [low, high] = [Math.min(...offsets), Math.max(...offsets)]
  const span = `${Number(low.toPrecision(4))} to ${Number(high.toPrecision(4))} ppm`
  const twice = offsets.length - new Set(offsets).size
  const problems: UploadProblem[] = []
  if (new Set(offsets).size < 5) problems.push(blocks('fewOffsets', `${name} has ${new Set(offsets).size} different offsets.`, 'five offsets or more, on both sides of water', at))
  if (low >= 0 || high <= 0) problems.push(asks('oneSided', `${name}: offsets run from ${span}, on one side of water only; there is no asymmetry then.`, 'the mirrored offsets as well, or the spectrum as it is for an omega plot', at))
  if (!(low < pool.offset_ppm && high > pool.offset_ppm)) problems.push(asks('poolOutside', `${name}: offsets from ${span} do not reach around the pool at ${pool.offset_ppm} ppm.`, 'offsets beyond the pool, or its offset corrected', at))
  if (twice > 0) problems.push(asks('repeatedOffsets', `${name}: ${twice} offset${twice > 1 ? 's come' : ' comes'} a second time and would be averaged.`, 'each offset once, or repeats as they are', at))
  return problems
}

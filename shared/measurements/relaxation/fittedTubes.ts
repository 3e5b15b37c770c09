import { inverseVarianceMean, tQuantile } from '../../science/statistics'
import type { NamedQuantity } from '../../evidence/quantity'
import type { AnalysisInput, SeriesTube, TubeResult } from '../types'
import { leftOutOf } from './exclusions'
import { ratesOf } from './fittedForm'
import { rateOf } from './tubeResult'

/** Names of the measured relaxation: T1 with R1, or T2 with R2. */
export function relaxationNames(quantity: unknown): { digit: '1' | '2', time: string, rate: string } {
  const digit = quantity === 'T2' ? '2' : '1'
  return { digit, time: `t${digit}_s`, rate: `rate${digit}_per_s` }
}

/** Tubes whose relaxation was fitted elsewhere: repeats of one tube become their mean; nothing else is done to the numbers. */
export function readFittedTubes(input: AnalysisInput): TubeResult[] {
  return input.tubes.map(tube => tubeResult(tube, input))
}

function tubeResult(tube: SeriesTube, { exclusions, conditions }: AnalysisInput): TubeResult {
  const left = leftOutOf(tube, exclusions)
  const { digit, time, rate } = relaxationNames(conditions.quantity)
  const isTime = tube.points.columns[0] === 't_s'
  const all = ratesOf(tube)
  const used = all.filter((_, index) => !left.points.has(index))
  const mean = meanRate(used)
  const values = tube.points.rows.map(row => row[0] ?? Number.NaN)
  const fitted = mean === null ? null : isTime ? 1 / mean.value : mean.value
  const base = { tubeNo: tube.tubeNo, label: tube.label, role: tube.role, conc_mM: tube.conc_mM, excluded: left.tube, curve: [], passed: [], statistics: null, secondOpinion: null }
  const points = values.map((y, index) => ({ index, x: index + 1, y, fitted, residual: fitted === null ? null : y - fitted, studentised: null, excluded: left.points.get(index) ?? null }))
  if (mean === null) {
    return { ...base, headline: null, parameters: [], refusal: { reason: 'tooFewPoints', message: 'No value of this tube is left.', accepted: 'At least one value.' }, points, flags: [] }
  }
  const asRate: NamedQuantity = { name: rate, label: `R_${digit}`, unit: 's^-1', kind: '=', evidenceId: null, ...mean }
  const asTime = { ...rateOf(asRate, time, `T_${digit}`), unit: 's' }
  return { ...base, headline: asTime, parameters: [asTime, asRate], refusal: null, points, flags: flagsOf(tube, mean) }
}

/** Inverse-variance mean where every repeat has its error, else the plain mean with the error of its scatter; one value keeps the error it has. */
function meanRate(values: readonly { rate_per_s: number, se_per_s: number | null }[]): { value: number, se: number | null, interval: [number, number] | null } | null {
  const first = values[0]
  if (first === undefined) return null
  const rates = values.map(value => value.rate_per_s)
  const errors = values.flatMap(value => value.se_per_s ?? [])
  if (values.length === 1) return { value: first.rate_per_s, se: first.se_per_s, interval: null }
  if (errors.length === values.length) {
    const { mean, se, chi2 } = inverseVarianceMean(rates, errors)
    const scaled = se * Math.sqrt(Math.max(1, chi2 / (rates.length - 1)))
    return { value: mean, se: scaled, interval: null }
  }
  const mean = rates.reduce((sum, rate) => sum + rate, 0) / rates.length
  const se = Math.sqrt(rates.reduce((sum, rate) => sum + (rate - mean) ** 2, 0) / (rates.length - 1) / rates.length)
  if (!(se > 0)) return { value: mean, se: null, interval: null }
  const half = tQuantile(0.975, rates.length - 1) * se
  return { value: mean, se, interval: [mean - half, mean + half] }
}

function flagsOf(tube: SeriesTube, { value, se }: { value: number, se: number | null }): TubeResult['flags'] {
  if (se === null || se <= 0.05 * value) return []
  return [{ id: 'largeError', title: 'Standard error above 5 %', sentence: `The standard error is ${Number((100 * se / value).toPrecision(3))} % of the rate. Look at the fit that gave it, or measure again.`, tubeNo: tube.tubeNo }]
}

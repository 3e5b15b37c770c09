import { fitLine } from '../least-squares/line'
import { refuseExchange, type ExchangeRefusal } from './refusal'

/** One reading without saturation, or with it so far off resonance that it acts on nothing. */
export interface S0Reading {
  readonly signal_au: number
  /** Place in the order of acquisition, in the count of the spectrum's own points; null = not known. */
  readonly order: number | null
}

export interface RawSpectrum {
  readonly offset_ppm: readonly number[]
  readonly signal_au: readonly number[]
  /** Place of each point in the order of acquisition; null where it is not known: then S0 cannot be followed through the scan. */
  readonly order: readonly number[] | null
  readonly s0: readonly S0Reading[]
  /** Standard deviation of one reading, where the file gives it. */
  readonly sd_au: number | null
}

/** Z = S/S0 against the offset, ascending, each offset once. */
export interface NormalisedSpectrum {
  readonly ok: true
  readonly offset_ppm: readonly number[]
  readonly z: readonly number[]
  /** Standard error of each Z from the noise of its own reading; null where no noise is known. */
  readonly zSe: readonly number[] | null
  /** Relative standard error of S0, which all points of a spectrum share; null where no noise is known. */
  readonly s0RelativeSe: number | null
  /** Readings averaged in each point: more than one where an offset came twice. */
  readonly readings: readonly number[]
  /** Positions in the raw spectrum that make up each point. */
  readonly members: readonly (readonly number[])[]
  /** Mean S0. */
  readonly s0_au: number
  /** SD of one reading, and where it is from. */
  readonly noise: { readonly sd_au: number, readonly from: 'given' | 's0Repeats' | 's0Line', readonly dof: number | null } | null
  /** Change of S0 from the first to the last bracket, as a fraction of the first; null with one bracket or no order. */
  readonly drift: { readonly fraction: number, readonly se: number | null } | null
}

interface Bracket { readonly order: number, readonly mean: number, readonly readings: readonly number[] }

/**
 * Divides a spectrum by S0. Readings of S0 that stand next to each other in the order of acquisition form a bracket; between brackets S0 is a straight line in that order,
 * before the first and after the last it is theirs. Without an order, S0 is the mean of all readings.
 *
 * The noise of a reading is, in this order of preference, the one given, the scatter of S0 within brackets, or (three readings or more) their scatter about a line in the order.
 */
export function normaliseSpectrum(raw: RawSpectrum): NormalisedSpectrum | ExchangeRefusal {
  const refusal = refuseRaw(raw)
  if (refusal) return refusal
  const brackets = bracketsOf(raw)
  const noise = noiseOf(raw, brackets)
  const s0At = (i: number) => interpolateS0(brackets, raw.order === null ? null : raw.order[i]!)
  const order = raw.offset_ppm.map((_, i) => i).sort((a, b) => raw.offset_ppm[a]! - raw.offset_ppm[b]! || a - b)
  const members: number[][] = []
  for (const i of order) {
    const last = members.at(-1)
    if (last && raw.offset_ppm[last[0]!] === raw.offset_ppm[i]) last.push(i)
    else members.push([i])
  }
  const mean = (of: (i: number) => number) => members.map(group => group.reduce((sum, i) => sum + of(i), 0) / group.length)
  const perBracket = raw.s0.length / brackets.length
  const meanS0 = brackets.reduce((sum, one) => sum + one.mean, 0) / brackets.length
  return {
    ok: true, members, s0_au: meanS0, readings: members.map(group => group.length), offset_ppm: members.map(group => raw.offset_ppm[group[0]!]!),
    z: mean(i => raw.signal_au[i]! / s0At(i)), noise, drift: driftOf(brackets, noise?.sd_au ?? null),
    zSe: noise && members.map(group => Math.sqrt(group.reduce((sum, i) => sum + (noise.sd_au / s0At(i)) ** 2, 0)) / group.length),
    s0RelativeSe: noise && noise.sd_au / Math.sqrt(perBracket) / meanS0,
  }
}

function refuseRaw({ offset_ppm, signal_au, order, s0, sd_au }: RawSpectrum): ExchangeRefusal | null {
  if (signal_au.length !== offset_ppm.length || (order && order.length !== offset_ppm.length)) return refuseExchange('lengthMismatch', `${offset_ppm.length} offsets, ${signal_au.length} signals.`, 'One signal for each offset.')
  if (s0.length === 0) return refuseExchange('noS0', 'The spectrum has no reading of S0: nothing says what 100 % of the water signal is.', 'A reading without saturation or far off resonance; two or more, before and after, show drift and noise as well.')
  const badS0 = s0.findIndex(one => !(one.signal_au > 0 && one.signal_au < Infinity))
  if (badS0 >= 0) return refuseExchange('badS0', `Reading ${badS0 + 1} of S0 is ${s0[badS0]!.signal_au}.`, 'S0 above zero.')
  const bad = offset_ppm.findIndex((offset, i) => !Number.isFinite(offset) || !Number.isFinite(signal_au[i]))
  if (bad >= 0) return refuseExchange('notFinite', `Point ${bad + 1} is not a pair of numbers.`, 'Finite offsets and signals.')
  if (sd_au !== null && !(sd_au > 0 && sd_au < Infinity)) return refuseExchange('badSigma', `The standard deviation of a reading is ${sd_au}.`, 'A standard deviation above zero, or none.')
  if (new Set(offset_ppm).size < 3) return refuseExchange('tooFewPoints', `${new Set(offset_ppm).size} different offsets.`, 'Three offsets or more.')
  return null
}

function bracketsOf({ s0, order }: RawSpectrum): Bracket[] {
  const readings = s0.map(one => one.signal_au)
  const average = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length
  if (order === null || s0.some(one => one.order === null)) return [{ order: 0, mean: average(readings), readings }]
  const sorted = [...s0].sort((a, b) => a.order! - b.order!)
  const groups: S0Reading[][] = []
  for (const one of sorted) {
    const last = groups.at(-1)
    const isSeparate = !last || order.some(at => at > last.at(-1)!.order! && at < one.order!)
    if (isSeparate) groups.push([one])
    else last.push(one)
  }
  return groups.map(group => ({ order: average(group.map(one => one.order!)), mean: average(group.map(one => one.signal_au)), readings: group.map(one => one.signal_au) }))
}

function interpolateS0(brackets: readonly Bracket[], order: number | null): number {
  const next = order === null ? -1 : brackets.findIndex(one => one.order >= order)
  if (order === null || next === 0) return brackets[0]!.mean
  if (next < 0) return brackets.at(-1)!.mean
  const [a, b] = [brackets[next - 1]!, brackets[next]!]
  return a.mean + ((order - a.order) / (b.order - a.order)) * (b.mean - a.mean)
}

function noiseOf(raw: RawSpectrum, brackets: readonly Bracket[]): NormalisedSpectrum['noise'] {
  if (raw.sd_au !== null) return { sd_au: raw.sd_au, from: 'given', dof: null }
  const dof = raw.s0.length - brackets.length
  const within = brackets.reduce((sum, { mean, readings }) => sum + readings.reduce((part, value) => part + (value - mean) ** 2, 0), 0)
  if (dof > 0 && within > 0) return { sd_au: Math.sqrt(within / dof), from: 's0Repeats', dof }
  if (brackets.length < 3) return null
  const line = fitLine({ x: brackets.map(one => one.order), y: brackets.map(one => one.mean) })
  return line.ok && line.sigma !== null && line.sigma > 0 ? { sd_au: line.sigma, from: 's0Line', dof: line.dof } : null
}

function driftOf(brackets: readonly Bracket[], sd_au: number | null): NormalisedSpectrum['drift'] {
  if (brackets.length < 2) return null
  const [first, last] = [brackets[0]!, brackets.at(-1)!]
  const se = sd_au === null ? null : (sd_au / first.mean) * Math.sqrt(1 / first.readings.length + 1 / last.readings.length)
  return { fraction: last.mean / first.mean - 1, se }
}

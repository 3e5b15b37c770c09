import type { MeasurementKind } from '../types'

type Propose = NonNullable<MeasurementKind['propose']>

const rounded = (value: number): number => Number(value.toPrecision(2))
const spread = (low: number, high: number, count: number): number[] => [...new Set(Array.from({ length: count }, (_, i) => rounded(low * (high / low) ** (i / (count - 1)))))]

/** Recovery times: from a fifth of the shortest T1 to five times the longest, evenly spread in their logarithm. */
export const proposeRecovery: Propose = ({ shortest_s, longest_s }) => ({
  values: spread(shortest_s / 5, 5 * longest_s, 14), why: `From a fifth of the shortest T1 expected to five times the longest, evenly in the logarithm: every tube gets points before T1 and on its plateau.`,
})

/** Echoes at whole multiples of a spacing: the first within a quarter of the shortest T2, the last beyond twice the longest, at most 64. */
export const proposeEchoes: Propose = ({ shortest_s, longest_s }) => {
  const spacing = rounded(Math.max(shortest_s / 4, (2 * longest_s) / 64))
  const count = Math.min(64, Math.max(8, Math.ceil((2 * longest_s) / spacing)))
  return { values: Array.from({ length: count }, (_, i) => Number((spacing * (i + 1)).toPrecision(6))), why: `${count} echoes ${Number((1e3 * spacing).toPrecision(3))} ms apart: the first within a quarter of the shortest T2 where 64 echoes allow it, the last at twice the longest.` }
}

/** Flip angles around those of largest signal: cos α = exp(−TR/T1) for the shortest and the longest T1. */
export const proposeAngles: Propose = ({ shortest_s, longest_s, tr_s }) => {
  if (tr_s === null) return null
  const ernst = (t1_s: number) => Math.acos(Math.exp(-tr_s / t1_s))
  const high = Math.min(Math.PI / 2, 3 * ernst(shortest_s))
  return { values: spread(ernst(longest_s) / 3, high, 10), why: 'From a third of Ernst\'s angle at the longest T1 expected to three times that at the shortest: each tube rises to its top and falls again.' }
}

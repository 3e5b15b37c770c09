/** T1 expected of a tube without agent: a record that can be edited, with its source. */
export interface BlankRange {
  readonly medium: string
  readonly aeration: 'degassed' | 'airSaturated' | null
  readonly temperature_K: number
  /** Null where the field does not matter. */
  readonly b0_T: number | null
  readonly low_s: number
  readonly high_s: number
  readonly source: string
}

/** Starting records. The values are from practice; the widths around them are a screening assumption. */
export const BLANK_RANGES: readonly BlankRange[] = [
  { medium: 'water', aeration: 'degassed', temperature_K: 298.15, b0_T: null, low_s: 3.3, high_s: 3.8, source: 'about 3.57 s, Krynicki, Physica 32, 167 (1966), from memory; width assumed' },
  { medium: 'water', aeration: 'airSaturated', temperature_K: 298.15, b0_T: null, low_s: 2.5, high_s: 3.1, source: 'about 2.8 s with dissolved oxygen, from practice; width assumed' },
  { medium: 'plasma', aeration: null, temperature_K: 310.15, b0_T: 3, low_s: 1.6, high_s: 2.0, source: 'from practice' },
]

export interface BlankConditions {
  readonly medium: string | null
  readonly aeration: 'degassed' | 'airSaturated' | null
  readonly temperature_K: number | null
  readonly b0_T: number | null
}

/** Records for these conditions: the same medium, within 2 K and, where the record names a field, within 5 % of it. Unknown aeration matches every record. */
export function findBlankRanges(ranges: readonly BlankRange[], conditions: BlankConditions): BlankRange[] {
  const { medium, aeration, temperature_K, b0_T } = conditions
  if (medium === null || temperature_K === null) return []
  return ranges.filter(range => range.medium === medium && Math.abs(range.temperature_K - temperature_K) <= 2
    && (range.b0_T === null || (b0_T !== null && Math.abs(b0_T / range.b0_T - 1) <= 0.05))
    && (aeration === null || range.aeration === null || range.aeration === aeration))
}

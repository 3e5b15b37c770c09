import type { ModelAxis, ModelParameter } from './define'
import { LARGEST_SIGNAL } from './recovery'

/** Declarations and start values shared by the multi-echo models. */
export const TE_AXIS: ModelAxis = { name: 'te_s', label: 'TE', unit: 's', dimension: 'time' }

export const ECHO_PARAMETERS = {
  a: { label: 'a', unit: 'au', min: 0, max: LARGEST_SIGNAL },
  t2: { label: 'T2', unit: 's', min: 1e-5, max: 100 },
  c: { label: 'c', unit: 'au', min: -LARGEST_SIGNAL, max: LARGEST_SIGNAL },
  sigma: { label: 'σ', unit: 'au', min: 0, max: LARGEST_SIGNAL },
} as const satisfies Record<string, ModelParameter>

export const EXAMPLE_TE_S = Array.from({ length: 24 }, (_, i) => 0.012 * (i + 1))

/**
 * Amplitude at TE = 0 and T2 read off the points: the straight line through the logarithms of those above a floor, weighted by their squares.
 * @param floor_au what is taken off every signal first
 */
export function guessDecay(te_s: readonly number[], signal_au: readonly number[], floor_au = 0): { a_au: number, t2_s: number } {
  const largest = Math.max(...signal_au.map(value => value - floor_au))
  let [w, wx, wy, wxx, wxy] = [0, 0, 0, 0, 0]
  for (let i = 0; i < te_s.length; i++) {
    const above = (signal_au[i]! - floor_au) / largest
    if (!(above > 0.05)) continue
    const weight = above * above
    const y = Math.log(above)
    w += weight
    wx += weight * te_s[i]!
    wy += weight * y
    wxx += weight * te_s[i]! * te_s[i]!
    wxy += weight * te_s[i]! * y
  }
  const slope = (w * wxy - wx * wy) / (w * wxx - wx * wx)
  const last = Math.max(...te_s)
  const t2_s = slope < 0 ? -1 / slope : 2 * last
  const a_au = largest * Math.exp(slope < 0 ? (wy - slope * wx) / w : 0)
  const inside = (value: number, { min, max }: ModelParameter) => Math.min(Math.max(value, min), max)
  return { a_au: inside(Number.isFinite(a_au) ? a_au : Math.abs(largest), ECHO_PARAMETERS.a), t2_s: inside(t2_s, ECHO_PARAMETERS.t2) }
}

/** T2 values that echoes at these times could tell apart: from a fifth of the shortest spacing to fifty times the longest time. */
export function decayRange(te_s: ArrayLike<number>): readonly [number, number] {
  const positive = Array.from(te_s).filter(te => te > 0)
  const low = Math.max(ECHO_PARAMETERS.t2.min, Math.min(...positive) / 10)
  const high = Math.min(ECHO_PARAMETERS.t2.max, 50 * Math.max(...positive))
  return low < high ? [low, high] : [ECHO_PARAMETERS.t2.min, ECHO_PARAMETERS.t2.max]
}

/** Smallest signal of a tenth of the echoes, at least one: an estimate of the floor where the train is long enough to reach it. */
export function tailOf(te_s: readonly number[], signal_au: readonly number[]): number {
  const order = te_s.map((_, i) => i).sort((i, j) => te_s[j]! - te_s[i]!)
  const count = Math.max(1, Math.floor(order.length / 10))
  return order.slice(0, count).reduce((sum, i) => sum + signal_au[i]!, 0) / count
}

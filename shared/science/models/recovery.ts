import type { FitRefused } from '../least-squares/outcome'
import type { ModelAxis, ModelParameter, ModelSetting } from './define'

/** Declarations and start values shared by the recovery models. */
export const TI_AXIS: ModelAxis = { name: 'ti_s', label: 'TI', unit: 's', dimension: 'time' }
export const SIGNAL_AXIS: ModelAxis = { name: 'signal_au', label: 'Signal', unit: 'au', dimension: 'signal' }

/** Signals have no natural scale: the bound only keeps their squares finite. */
export const LARGEST_SIGNAL = 1e100

export const PARAMETERS = {
  a: { label: 'a', unit: 'au', min: -LARGEST_SIGNAL, max: LARGEST_SIGNAL },
  b: { label: 'b', unit: 'au', min: -LARGEST_SIGNAL, max: LARGEST_SIGNAL },
  c: { label: 'c', unit: 'au', min: -LARGEST_SIGNAL, max: LARGEST_SIGNAL },
  m0: { label: 'M0', unit: 'au', min: 0, max: LARGEST_SIGNAL },
  t1: { label: 'T1', unit: 's', min: 1e-4, max: 100 },
} as const satisfies Record<string, ModelParameter>

/** Angle of the inversion pulse: π unless it is known to be less. It is not fitted; a free angle is the three-parameter model again. */
export const INVERSION_ANGLE: ModelSetting = { label: 'Inversion angle', unit: 'rad', dimension: 'angle', min: 0, max: 2 * Math.PI, standard: Math.PI }

/**
 * Plateau, value at time zero and T1 read off the points: last and first signal in order of time, and the time at which half of the change is made,
 * which is T1·ln 2 for a recovery sampled from its start to its end.
 */
export function guessRecovery(ti_s: readonly number[], signal_au: readonly number[]): { plateau: number, start: number, t1_s: number } {
  const order = ti_s.map((_, i) => i).sort((i, j) => ti_s[i]! - ti_s[j]!)
  const start = signal_au[order[0]!]!
  const plateau = signal_au[order[order.length - 1]!]!
  const half = (start + plateau) / 2
  const crossing = order.findIndex(i => (signal_au[i]! - half) * (start - half) <= 0)
  const at = ti_s[order[Math.max(crossing, 0)]!]!
  const last = ti_s[order[order.length - 1]!]!
  const t1_s = (at > 0 ? at : last / 3) / Math.LN2
  return { plateau, start, t1_s: Math.min(Math.max(t1_s, PARAMETERS.t1.min), PARAMETERS.t1.max) }
}

/** T1 values that points at these times could tell apart: from a fiftieth of the shortest to fifty times the longest. */
export function recoveryRange(ti_s: ArrayLike<number>): readonly [number, number] {
  const positive = Array.from(ti_s).filter(ti => ti > 0)
  const low = Math.max(PARAMETERS.t1.min, Math.min(...positive) / 50)
  const high = Math.min(PARAMETERS.t1.max, 50 * Math.max(...positive))
  return low < high ? [low, high] : [PARAMETERS.t1.min, PARAMETERS.t1.max]
}

export function refuseNegativeTimes(ti_s: readonly number[]): FitRefused | null {
  const at = ti_s.findIndex(ti => ti < 0)
  if (at < 0) return null
  return { ok: false, reason: 'outOfDomain', message: `Point ${at + 1}: the time ${ti_s[at]} s is negative.`, accepted: 'Times of 0 s or more.' }
}

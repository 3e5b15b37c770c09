/** Which measurement counts at a profile's condition. */
import { factOf, textOf } from './read'
import type { EvidenceItem } from './types'
import type { ScreeningProfile } from './profile'

/** Largest differences at which a measurement still counts. */
export const WINDOW = { temperature_K: 2, field_frac: 0.05, pH: 0.2 } as const
/** Differences below which two measurements are at one condition and may be pooled. */
const SAME = { temperature_K: 0.5, field_frac: 0.01, pH: 0.05 } as const

const MEDIA: readonly (readonly [string, RegExp])[] = [
  ['plasma', /plasma|serum/], ['blood', /blood/],
  ['aqueous', /water|saline|buffer|hepes|pbs|tris|mes\b|nacl|aqueous/],
]

/** Class of a medium: plasma (with serum), blood, aqueous; another medium is a class of its own; null where it is not stated. */
export function mediumClass(medium: string | null): string | null {
  if (medium === null) return null
  const text = medium.trim().toLowerCase()
  return MEDIA.find(([, pattern]) => pattern.test(text))?.[0] ?? text
}

export interface Target {
  readonly mediumClass: string | null
  readonly temperature_K: number
  readonly b0_T: number
  readonly pH: number
}

export function targetOf(profile: ScreeningProfile): Target {
  return { mediumClass: mediumClass(profile.medium), temperature_K: profile.temperature_K, b0_T: profile.b0_T, pH: profile.pH }
}

/**
 * Distance from the target in units of the window, or null where the measurement does not count. Medium, temperature and field must be
 * stated; a pH that is not stated counts as at the edge of the window (plasma is buffered by itself) and is flagged by the caller.
 */
export function distanceTo(item: EvidenceItem, target: Target): number | null {
  const temperature_K = factOf(item, 'temperature_K')
  const b0_T = factOf(item, 'b0_T')
  const pH = factOf(item, 'pH')
  if (temperature_K === null || b0_T === null || mediumClass(textOf(item, 'medium')) !== target.mediumClass) return null
  const parts = [
    Math.abs(temperature_K - target.temperature_K) / WINDOW.temperature_K,
    Math.abs(b0_T / target.b0_T - 1) / WINDOW.field_frac,
    pH === null ? 1 : Math.abs(pH - target.pH) / WINDOW.pH,
  ]
  // a hair of slack, so that 2 K entered as 37 and 39 °C still counts after its conversion to kelvin
  return parts.every(part => part <= 1 + 1e-9) ? Math.hypot(...parts) : null
}

/** The measurements that count: those at the condition nearest to the target, nearest first. */
export function nearestItems(items: readonly EvidenceItem[], target: Target): EvidenceItem[] {
  const counted = items.flatMap((item) => {
    const distance = distanceTo(item, target)
    return distance === null ? [] : [{ item, distance }]
  }).sort((a, b) => a.distance - b.distance || (a.item.id < b.item.id ? -1 : 1))
  const nearest = counted[0]?.item
  return nearest ? counted.map(c => c.item).filter(item => sameCondition(item, nearest)) : []
}

function sameCondition(a: EvidenceItem, b: EvidenceItem): boolean {
  const near = (key: string, tolerance: (value: number) => number): boolean => {
    const [x, y] = [factOf(a, key), factOf(b, key)]
    return x === null || y === null ? x === y : Math.abs(x - y) <= tolerance(y)
  }
  return near('temperature_K', () => SAME.temperature_K) && near('b0_T', b0 => SAME.field_frac * b0) && near('pH', () => SAME.pH)
}

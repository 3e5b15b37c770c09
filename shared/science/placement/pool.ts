/**
 * Several measurements of one relaxivity at one condition, pooled by inverse variance with the Birge factor.
 *
 * @source R. T. Birge, Phys. Rev. 40, 207 (1932).
 */
import { chi2UpperP } from '../statistics'
import { rootSumSquares, Z_95 } from './read'
import type { EvidenceItem } from './types'

/** Below this probability of the scatter, the measurements disagree: each is drawn and none is on the front. */
export const DISAGREE_P = 0.01

export interface ScalePart {
  readonly groupId: string
  /** Relative standard error that the group's common factor gives to the pooled value. */
  readonly relative: number
}

export interface Pooled {
  readonly value: number
  readonly kind: '=' | '<' | '>'
  /** Whole standard error; null where a single value has none, or several have none. */
  readonly se: number | null
  /** Relative standard error without the shared factors; null as for `se`. */
  readonly ownRelative: number | null
  readonly scales: readonly ScalePart[]
  readonly birge: number
  /** Probability of a scatter as large as this; null for one value. */
  readonly p: number | null
  readonly disagree: boolean
  readonly items: readonly EvidenceItem[]
}

/** Standard error of an item, from its interval where only that is given. */
function seOf(item: EvidenceItem): number | null {
  return item.se ?? (item.interval === null ? null : (item.interval[1] - item.interval[0]) / (2 * Z_95))
}

const scaleOf = (item: EvidenceItem): number => item.covarianceGroup?.scaleFraction ?? 0

/** Own standard error, the shared factor taken out. */
function ownSe(item: EvidenceItem): number | null {
  const se = seOf(item)
  const common = scaleOf(item) * item.value
  return se === null ? null : Math.sqrt(Math.max(0, se * se - common * common))
}

/**
 * Pools items of one condition; null for none. Exact values go before bounds; of bounds alone the sharpest is kept.
 * Values without an error are averaged only where none has one, and the result then has none.
 */
export function poolItems(items: readonly EvidenceItem[]): Pooled | null {
  const exact = items.filter(item => item.kind === '=' && item.value > 0)
  if (exact.length === 0) return sharpestBound(items.filter(item => item.kind !== '=' && item.value > 0))
  const withError = exact.filter(item => (seOf(item) ?? 0) > 0)
  if (withError.length === 0) {
    const value = exact.reduce((sum, item) => sum + item.value, 0) / exact.length
    return { value, kind: '=', se: null, ownRelative: null, scales: [], birge: 1, p: null, disagree: false, items: exact }
  }
  return weightedMean(withError)
}

function sharpestBound(items: readonly EvidenceItem[]): Pooled | null {
  const best = items.reduce<EvidenceItem | null>((kept, item) => (kept === null || (item.kind === '<' ? item.value < kept.value : item.value > kept.value) ? item : kept), null)
  return best && { value: best.value, kind: best.kind, se: null, ownRelative: null, scales: [], birge: 1, p: null, disagree: false, items: [best] }
}

function weightedMean(items: readonly EvidenceItem[]): Pooled {
  const groups = new Set(items.map(item => item.covarianceGroup?.id ?? item.id))
  // within one group the common factor moves all values together: only their own errors tell them apart
  const oneGroup = groups.size === 1 && items.every(item => (ownSe(item) ?? 0) > 0)
  const spread = items.map(item => (oneGroup ? ownSe(item)! : seOf(item)!))
  const weights = spread.map(s => 1 / (s * s))
  const weightSum = weights.reduce((a, b) => a + b, 0)
  const value = items.reduce((sum, item, i) => sum + weights[i]! * item.value, 0) / weightSum
  const chi2 = items.reduce((sum, item, i) => sum + weights[i]! * (item.value - value) * (item.value - value), 0)
  const dof = items.length - 1
  const birge = dof > 0 ? Math.sqrt(Math.max(1, chi2 / dof)) : 1
  const p = dof > 0 ? chi2UpperP(chi2, dof) : null
  const own = birge * rootSumSquares(...items.map((item, i) => weights[i]! / weightSum * ownSe(item)!))
  const scales = scaleParts(items, weights.map(w => w / weightSum), value)
  const se = rootSumSquares(own, ...scales.map(part => part.relative * value))
  return { value, kind: '=', se, ownRelative: own / value, scales, birge, p, disagree: p !== null && p < DISAGREE_P, items }
}

function scaleParts(items: readonly EvidenceItem[], shares: readonly number[], value: number): ScalePart[] {
  const parts = new Map<string, number>()
  for (const [i, item] of items.entries()) {
    if (item.covarianceGroup === null || scaleOf(item) === 0) continue
    const { id } = item.covarianceGroup
    parts.set(id, (parts.get(id) ?? 0) + shares[i]! * item.value / value * scaleOf(item))
  }
  return [...parts].map(([groupId, relative]) => ({ groupId, relative }))
}

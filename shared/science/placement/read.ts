/** Reading evidence: which items count, and the facts they carry. */
import { logSpread } from '../kinetics/firstOrder'
import type { EvidenceItem, PlacedQuantity } from './types'

/** 97.5 % point of the normal distribution. */
export const Z_95 = 1.959963984540054

/** √Σ x², with nothing left to the engine: `Math.hypot` and `**` may differ in the last bit between engines, and draws rest on this. */
export function rootSumSquares(...parts: readonly number[]): number {
  let sum = 0
  for (const part of parts) sum += part * part
  return Math.sqrt(sum)
}

/** A number among conditions or parameters; null where it is not stated. */
export function factOf(item: EvidenceItem, key: string): number | null {
  const value = item.conditions[key] ?? item.parameters?.[key]
  return typeof value === 'number' && Number.isFinite(value) ? value : null
}

/** A text among conditions or parameters; null where it is not stated. */
export function textOf(item: EvidenceItem, key: string): string | null {
  const value = item.conditions[key] ?? item.parameters?.[key]
  return typeof value === 'string' && value !== '' ? value : null
}

/** Items that count, by quantity. */
export type EvidenceIndex = ReadonlyMap<string, readonly EvidenceItem[]>

/**
 * Sorts evidence by quantity. Of each quantity the signed items count; where unsigned ones are asked for and no signed one exists, those
 * do. Values that are not finite never count.
 */
export function indexEvidence(evidence: readonly EvidenceItem[], includeUnsigned: boolean): EvidenceIndex {
  const byQuantity = new Map<string, EvidenceItem[]>()
  for (const item of evidence) {
    if (!Number.isFinite(item.value) || !(item.signed || includeUnsigned)) continue
    const known = byQuantity.get(item.quantity)
    if (known) known.push(item)
    else byQuantity.set(item.quantity, [item])
  }
  if (includeUnsigned) {
    for (const [quantity, items] of byQuantity) {
      const signed = items.filter(item => item.signed)
      if (signed.length > 0 && signed.length < items.length) byQuantity.set(quantity, signed)
    }
  }
  return byQuantity
}

const NONE: readonly EvidenceItem[] = []

export function itemsOf(index: EvidenceIndex, quantity: string): readonly EvidenceItem[] {
  return index.get(quantity) ?? NONE
}

/** The newest of several items: ids are time-ordered, so the largest id. Null for none. */
export function newestOf(items: readonly EvidenceItem[]): EvidenceItem | null {
  return items.reduce<EvidenceItem | null>((best, item) => (best === null || item.id > best.id ? item : best), null)
}

/** Spread of ln(value) of a positive item: from its standard error, or its interval; null where it has neither. */
export function logSpreadOf(item: { value: number, se: number | null, interval: readonly [number, number] | null }): number | null {
  if (item.se !== null && item.value > 0) return logSpread(item.value, item.se)
  const interval = item.interval
  if (interval !== null && interval[0] > 0 && interval[1] > 0) return Math.abs(Math.log(interval[1] / interval[0])) / (2 * Z_95)
  return null
}

/** An item as a placed quantity, as it is. */
export function placedFrom(item: EvidenceItem | null, label: string): PlacedQuantity | null {
  if (item === null) return null
  return { value: item.value, kind: item.kind, se: item.se, interval: item.interval, unit: item.unit, evidenceIds: [item.id], label, carried: false }
}

/** Number of independent preparations behind some items: the batches they name, at least one. */
export function preparationsOf(items: readonly EvidenceItem[]): number {
  if (items.length === 0) return 0
  return Math.max(1, new Set(items.map(item => item.batchId).filter(id => id !== null)).size)
}

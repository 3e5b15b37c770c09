import { EVIDENCE_QUANTITIES } from '../evidence/quantities'
import type { EvidenceItemDto } from '../evidence/item'
import type { Placement } from '../science/placement/types'

/** What a decision rested on, or would rest on now. */
export interface Ground { placement: Placement, evidence: readonly EvidenceItemDto[] }
export interface Change { what: string, was: string, now: string }

const WORDS = { '=': '', '<': 'less than ', '>': 'more than ' } as const

/**
 * Whether the ground of a decision has moved: a new signed value outside the old 95 % interval, a value that is gone, or a change of lane, of a limit's
 * outcome or of front membership. An empty list = it stands as it did.
 */
export function groundMoved(then: Ground, now: Ground): Change[] {
  return [...valueChanges(then.evidence, now.evidence), ...placeChanges(then.placement, now.placement)]
}

/** Values are the same question when quantity, batch and every condition agree. */
const question = (item: EvidenceItemDto): string => JSON.stringify([item.quantity, item.batchId, Object.entries(item.conditions).sort(([a], [b]) => (a < b ? -1 : 1))])

function valueChanges(then: readonly EvidenceItemDto[], now: readonly EvidenceItemDto[]): Change[] {
  const today = new Map(now.map(item => [question(item), item]))
  return then.flatMap((old) => {
    const found = today.get(question(old)) ?? now.find(item => item.origin.chainId === old.origin.chainId && item.quantity === old.quantity)
    if (!found) return [{ what: labelOf(old), was: valueOf(old), now: 'no longer signed' }]
    return isOutside(old, found) ? [{ what: labelOf(old), was: valueOf(old), now: valueOf(found) }] : []
  })
}

function isOutside(old: EvidenceItemDto, now: EvidenceItemDto): boolean {
  if (old.id === now.id) return false
  if (old.value.kind === '<') return now.value.kind !== '<' && now.value.value > old.value.value
  if (old.value.kind === '>') return now.value.kind !== '>' && now.value.value < old.value.value
  const { interval, value } = old.value
  if (!interval) return now.value.value !== value
  const [low, high] = interval
  if (now.value.kind === '<') return now.value.value < low
  if (now.value.kind === '>') return now.value.value > high
  return now.value.value < low || now.value.value > high
}

function placeChanges(then: Placement, now: Placement): Change[] {
  const changes: Change[] = []
  if (then.lane !== now.lane) changes.push({ what: 'place on the map', was: LANES[then.lane], now: LANES[now.lane] })
  for (const limit of now.limits) {
    const before = then.limits.find(one => one.key === limit.key)
    if (before && before.outcome !== limit.outcome) changes.push({ what: `limit: ${limit.label}`, was: before.outcome, now: limit.outcome })
  }
  if (then.onFront !== now.onFront) changes.push({ what: 'front', was: then.onFront ? 'on the front' : 'not on the front', now: now.onFront ? 'on the front' : 'not on the front' })
  return changes
}

const LANES = { plane: 'in the plane', lossMissing: 'loss not measured', concentrationMissing: 'no working concentration', neither: 'neither measured' } as const
const labelOf = (item: EvidenceItemDto): string => EVIDENCE_QUANTITIES[item.quantity]?.label ?? item.quantity

function valueOf({ value }: EvidenceItemDto): string {
  const error = value.se === null ? '' : ` ± ${value.se.toPrecision(2)}`
  return `${WORDS[value.kind]}${Number(value.value.toPrecision(4))}${error} ${value.unit}`.trim()
}

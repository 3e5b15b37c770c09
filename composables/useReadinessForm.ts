import { READINESS_ITEMS, type ReadinessKey, type ReadinessKind } from '#shared/readiness'
import type { ReadinessPayload } from '#shared/schemas/readiness'

export interface ReadinessDraft { kind: ReadinessKind | 'notMeasured', value: number | null, se: number | null, conditions: string }

/** What the form of a readiness list holds; every item is "not measured" until somebody says otherwise, never a zero by default. */
export function useReadinessForm(initial: ReadinessPayload | null) {
  const draftOf = (key: ReadinessKey): ReadinessDraft => {
    const one = initial?.[key]
    return { kind: one?.kind ?? 'notMeasured', value: one?.value ?? null, se: one?.se ?? null, conditions: one?.conditions ?? '' }
  }
  const drafts = reactive(Object.fromEntries(READINESS_ITEMS.map(item => [item.key, draftOf(item.key)])) as Record<ReadinessKey, ReadinessDraft>)
  const note = ref(initial?.note ?? '')
  const answerOf = ({ kind, value, se, conditions }: ReadinessDraft) => kind === 'notMeasured' ? null : { kind, value, se: kind === '=' ? se : null, conditions }
  const toPayload = (): Record<string, unknown> => ({ ...Object.fromEntries(READINESS_ITEMS.map(item => [item.key, answerOf(drafts[item.key])])), note: note.value })
  return { drafts, note, toPayload }
}

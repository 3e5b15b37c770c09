import { fieldsOf, isAsked, type BoundKind, type RecordField, type RecordKind } from '#shared/evidence/records/define'
import type { RecordEntry, RecordValue } from '#shared/evidence/records/entry'
import type { StepRow } from '~/composables/useLigandForm'

/** What one field of the form holds; which parts count is for its type to say. */
export interface FieldState { value: number | null, se: number | null, bound: BoundKind, unit: string, steps: StepRow[], choice: string, text: string }

/** The state of a record's form, from the specification of its kind; filled from an entry where a new version is made of an old one. */
export function useRecordForm(kind: RecordKind, initial: RecordEntry = {}) {
  const state = reactive(Object.fromEntries(fieldsOf(kind).map(field => [field.key, startOf(field, initial[field.key])]))) as Record<string, FieldState>
  const toEntry = (): RecordEntry => Object.fromEntries(fieldsOf(kind).flatMap((field) => {
    const value = isAsked(field, choicesOf()) ? valueOf(field, state[field.key]!) : null
    return value ? [[field.key, value]] : []
  }))
  const choicesOf = (): RecordEntry => Object.fromEntries(fieldsOf(kind).flatMap(field => field.type === 'choice' && state[field.key]!.choice ? [[field.key, { type: 'choice' as const, choice: state[field.key]!.choice }]] : []))
  const groups = computed(() => {
    const asked = fieldsOf(kind).filter(field => isAsked(field, choicesOf()))
    return [...new Set(asked.map(field => field.group))].map(title => ({ title, fields: asked.filter(field => field.group === title) }))
  })
  return { state, groups, toEntry }
}

function startOf(field: RecordField, given: RecordValue | undefined): FieldState {
  const empty: FieldState = { value: null, se: null, bound: '=', unit: 'units' in field ? field.units[0] ?? '' : '', steps: [], choice: field.type === 'choice' ? field.preset ?? '' : '', text: '' }
  if (!given) return empty
  if (given.type === 'quantity') return { ...empty, value: given.value, se: given.se, bound: given.kind, unit: given.unit }
  if (given.type === 'number') return { ...empty, value: given.value, unit: given.unit }
  if (given.type === 'steps') return { ...empty, steps: given.steps.map(step => ({ ...step })) }
  return given.type === 'choice' ? { ...empty, choice: given.choice } : { ...empty, text: given.text }
}

/** Null where nothing was given: an empty field is never a zero. */
function valueOf(field: RecordField, { value, se, bound, unit, steps, choice, text }: FieldState): RecordValue | null {
  if (field.type === 'quantity') return value === null ? null : { type: 'quantity', kind: bound, value, se: bound === '=' ? se : null, unit }
  if (field.type === 'number') return value === null ? null : { type: 'number', value, unit }
  if (field.type === 'steps') {
    const given = steps.flatMap(step => step.value === null ? [] : [{ value: step.value, se: step.se }])
    return given.length === 0 ? null : { type: 'steps', steps: given }
  }
  if (field.type === 'choice') return choice ? { type: 'choice', choice } : null
  return text.trim() ? { type: 'text', text: text.trim() } : null
}

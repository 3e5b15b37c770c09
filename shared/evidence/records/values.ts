import type { Conditions } from '../../measurements/types'
import { unitOf } from '../../science/units'
import { fieldsOf, type BoundKind, type NumberField, type QuantityField, type RecordKind } from './define'
import type { RecordEntry } from './entry'

export interface StoredValue { value: number, kind: BoundKind, se: number | null }
export interface Step { value: number, se: number | null }

type Numeric = Pick<NumberField | QuantityField, 'dimension' | 'stored'>

/** A typed number in the unit it is kept in. A unit it was kept in already is left bit for bit. */
export function toStored(field: Numeric, value: number, unit: string): number {
  if (unit === field.stored || field.dimension === null) return value
  return unitOf(field.stored, field.dimension).fromSi(unitOf(unit, field.dimension).toSi(value))
}

/** A difference (an error) in the unit it is kept in: no zero point enters. */
export function spreadToStored(field: Numeric, spread: number, unit: string): number {
  return toStored(field, spread, unit) - toStored(field, 0, unit)
}

const numeric = (kind: RecordKind, key: string): NumberField | QuantityField => {
  const field = fieldsOf(kind).find(one => one.key === key)
  if (field?.type !== 'number' && field?.type !== 'quantity') throw new Error(`${kind.kind} has no number called ${key}.`)
  return field
}

/** A measured value in its stored unit, or null when it was not given. */
export function quantityIn(kind: RecordKind, entry: RecordEntry, key: string): StoredValue | null {
  const typed = entry[key]
  if (typed?.type !== 'quantity') return null
  const field = numeric(kind, key)
  return { value: toStored(field, typed.value, typed.unit), kind: typed.kind, se: typed.se === null ? null : spreadToStored(field, typed.se, typed.unit) }
}

export function numberIn(kind: RecordKind, entry: RecordEntry, key: string): number | null {
  const typed = entry[key]
  return typed?.type === 'number' ? toStored(numeric(kind, key), typed.value, typed.unit) : null
}

export const choiceIn = (entry: RecordEntry, key: string): string | null => {
  const typed = entry[key]
  return typed?.type === 'choice' ? typed.choice : null
}
export const textIn = (entry: RecordEntry, key: string): string | null => {
  const typed = entry[key]
  return typed?.type === 'text' && typed.text.trim() ? typed.text.trim() : null
}
export const stepsIn = (entry: RecordEntry, key: string): Step[] | null => {
  const typed = entry[key]
  return typed?.type === 'steps' && typed.steps.length > 0 ? typed.steps : null
}

/** The conditions of an entry in stored units, as they are kept beside the record and with each piece of evidence. */
export function conditionsOf(kind: RecordKind, entry: RecordEntry): Conditions {
  const conditions: Conditions = {}
  for (const field of kind.conditions) {
    const value = field.type === 'number' ? numberIn(kind, entry, field.key) : field.type === 'choice' ? choiceIn(entry, field.key) : field.type === 'text' ? textIn(entry, field.key) : null
    if (value !== null) conditions[field.key] = value
  }
  return conditions
}

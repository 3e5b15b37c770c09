import { unitOf } from '../../science/units'
import { formatNumber } from '../../format'
import { fieldsOf, isAsked, type NumberField, type QuantityField, type RecordContext, type RecordField, type RecordKind, type RecordProblem } from './define'
import type { RecordEntry, RecordValue } from './entry'
import { toStored } from './values'

/** Everything that is wrong with an entry, field by field: what was given and what would be accepted. An empty list means it can be kept. */
export function validateEntry(kind: RecordKind, entry: RecordEntry, context: RecordContext): RecordProblem[] {
  const problems = fieldsOf(kind).flatMap(field => checkField(field, entry))
  const known = new Set(fieldsOf(kind).map(field => field.key))
  for (const key of Object.keys(entry)) {
    if (!known.has(key)) problems.push({ field: key, message: `A record of this kind has no field called ${key}.`, accepted: [...known].join(', ') })
  }
  return problems.length > 0 ? problems : kind.check(entry, context)
}

function checkField(field: RecordField, entry: RecordEntry): RecordProblem[] {
  const given = entry[field.key]
  const refuse = (message: string, accepted = acceptedIn(field)): RecordProblem[] => [{ field: field.key, message: `${field.label}: ${message}`, accepted }]
  if (!isAsked(field, entry)) return given === undefined ? [] : refuse('does not belong to the form chosen.', 'leave it empty, or choose the other form')
  if (given === undefined || isEmpty(given)) return field.required ? refuse('is missing.') : []
  if (given.type !== field.type) return refuse('is not of the right sort.')
  const message = problemWith(field, given)
  return message === null ? [] : refuse(message)
}

const isEmpty = (given: RecordValue): boolean => (given.type === 'text' && given.text.trim() === '') || (given.type === 'steps' && given.steps.length === 0)

function problemWith(field: RecordField, given: RecordValue): string | null {
  if (field.type === 'choice' && given.type === 'choice') return field.options.some(option => option.value === given.choice) ? null : `"${given.choice}" is not one of the choices.`
  if (field.type === 'text' && given.type === 'text') return given.text.length > field.most ? 'is too long.' : null
  if (field.type === 'steps' && given.type === 'steps') return problemWithSteps(field, given)
  if ((field.type === 'quantity' || field.type === 'number') && (given.type === 'quantity' || given.type === 'number')) return problemWithNumber(field, given)
  return null
}

function problemWithSteps(field: RecordField & { type: 'steps' }, given: RecordValue & { type: 'steps' }): string | null {
  if (given.steps.length > field.most) return `${given.steps.length} constants are too many.`
  const odd = given.steps.find(({ value, se }) => !Number.isFinite(value) || value < field.min || value > field.max || (se !== null && !(se >= 0)))
  return odd ? `${formatNumber(odd.value, 4)} cannot be used.` : null
}

function problemWithNumber(field: NumberField | QuantityField, given: RecordValue & { type: 'number' | 'quantity' }): string | null {
  if (!field.units.includes(given.unit)) return `"${given.unit}" is not a unit for this.`
  const value = toStored(field, given.value, given.unit)
  const shown = `${formatNumber(given.value, 4)} ${given.unit}`.trim()
  if (!Number.isFinite(value)) return 'is not a number.'
  if (value < field.min || (field.isAbove && value <= field.min)) return `${shown} is too small.`
  if (value > field.max) return `${shown} is too large.`
  if (field.type !== 'quantity' || given.type !== 'quantity') return null
  if (!field.bounds.includes(given.kind)) return 'cannot be a bound of this sort.'
  if (given.se !== null && !(given.se >= 0)) return 'has a standard error that is no number of zero or more.'
  return given.kind !== '=' && given.se !== null ? 'is a bound and carries a standard error. A bound has none.' : null
}

/** What a field takes, in words. */
export function acceptedIn(field: RecordField): string {
  if (field.type === 'choice') return field.options.map(option => option.label).join(', ')
  if (field.type === 'text') return `a text of at most ${field.most} characters`
  if (field.type === 'steps') return `1 to ${field.most} log constants between ${formatNumber(field.min)} and ${formatNumber(field.max)}, each with its standard error where known`
  const [offered] = field.units
  const unit = offered ?? field.stored
  const low = `${field.isAbove ? 'above ' : ''}${formatNumber(fromStored(field, field.min, unit))}`
  const bounds = field.type === 'quantity' && field.bounds.length > 1 ? '; exact, less than or more than' : ''
  return `${low} to ${formatNumber(fromStored(field, field.max, unit))} ${unit}`.trim() + (field.units.length > 1 ? `, in ${field.units.join(', ')}` : '') + bounds
}

function fromStored(field: NumberField | QuantityField, value: number, unit: string): number {
  if (unit === field.stored || field.dimension === null) return value
  return unitOf(unit, field.dimension).fromSi(unitOf(field.stored, field.dimension).toSi(value))
}

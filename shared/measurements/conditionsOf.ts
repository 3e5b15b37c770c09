import type { Conditions, ConditionSpec, MeasurementKind, UploadProblem } from './types'
import { toShown } from './shownCondition'
import { acceptedFor, readDate, type FoundCondition } from './tabular/metadata'
import { blocks } from './tabular/problem'

/** Conditions of an upload: what the file says, then what the person chose, which wins. Only conditions of the kind are kept. */
export function mergeConditions(kind: MeasurementKind, found: readonly FoundCondition[], chosen: Conditions = {}): Conditions {
  const merged: Conditions = {}
  for (const spec of kind.conditions) {
    const inFile = found.find(condition => condition.key === spec.key)?.value ?? null
    merged[spec.key] = Object.hasOwn(chosen, spec.key) ? chosen[spec.key] ?? null : inFile
  }
  return Object.fromEntries(Object.entries(merged).filter(([key, value]) => value !== null && isAsked(kind, key, merged)))
}

/** What isAsked needs to know of a kind: the kind itself, or what a screen was told of it. */
export interface AskedFields { readonly conditions: readonly { readonly key: string, readonly when?: { readonly key: string, readonly is: readonly string[] } | null }[] }

/** True where the condition belongs to the form, given the others. */
export function isAsked(kind: AskedFields, key: string, conditions: Conditions): boolean {
  const spec = kind.conditions.find(candidate => candidate.key === key)
  if (spec === undefined) return false
  return !spec.when || spec.when.is.includes(String(conditions[spec.when.key] ?? ''))
}

/** What is wrong with the conditions: missing, of the wrong type, outside its range, not of this kind. */
export function checkConditions(kind: MeasurementKind, conditions: Conditions): UploadProblem[] {
  const known = kind.conditions.filter(spec => isAsked(kind, spec.key, conditions)).flatMap(spec => checkCondition(spec, conditions[spec.key] ?? null))
  const unknown = Object.keys(conditions).filter(key => !kind.conditions.some(spec => spec.key === key))
    .map(key => blocks('unknownCondition', `${key} is no condition of ${kind.title}.`, `one of: ${kind.conditions.map(spec => spec.key).join(', ')}`, { field: `conditions.${key}` }))
  return [...known, ...unknown]
}

function checkCondition(spec: ConditionSpec, value: number | string | null): UploadProblem[] {
  const refuse = (message: string) => [blocks('condition', message, acceptedWithRange(spec), { field: `conditions.${spec.key}` })]
  if (value === null || value === '') return spec.required ? refuse(`${spec.label} is missing.`) : []
  if (spec.type === 'number') {
    if (typeof value !== 'number' || !Number.isFinite(value)) return refuse(`${spec.label} is not a number.`)
    const isOutside = (spec.min !== undefined && value < spec.min) || (spec.max !== undefined && value > spec.max)
    return isOutside ? refuse(`${spec.label} is outside its range.`) : []
  }
  if (typeof value !== 'string') return refuse(`${spec.label} is not text.`)
  if (spec.type === 'choice' && !spec.choices?.some(choice => choice.value === value)) return refuse(`${spec.label} is none of its choices.`)
  if (spec.type === 'date' && readDate(value) !== value) return refuse(`${spec.label} is not a day.`)
  return value.length > 500 ? refuse(`${spec.label} has ${value.length} characters.`) : []
}

function acceptedWithRange(spec: ConditionSpec): string {
  if (spec.type !== 'number' || (spec.min === undefined && spec.max === undefined)) return acceptedFor(spec)
  const shown = (value: number) => String(Number(toShown(spec, value).toPrecision(6)))
  const ends = [spec.min === undefined ? null : `from ${shown(spec.min)}`, spec.max === undefined ? null : `up to ${shown(spec.max)}`]
  return [acceptedFor(spec), ...ends.filter(end => end !== null)].join(' ')
}

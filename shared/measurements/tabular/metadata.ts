import { storedUnit, toStored, type Unit } from '../../science/units'
import type { ColumnSpec, ConditionSpec, UploadProblem } from '../types'
import { findUnit, headerReadings, plainWords } from './headerText'
import { parseLooseNumber } from './numberCell'
import { cellName } from './place'
import { asks, quoted } from './problem'
import type { Delimiter, TableRecord } from './records'

/** A line outside the table that says something about it: 'Field: 3 T', '# temperature = 37 °C', 'pH,7.4'. */
export interface MetadataLine {
  row: number
  /** Column of the value, from 1. */
  column: number
  /** null for a line that is only words. */
  key: string | null
  value: string
  /** 'cell B3' where the value has a cell of its own, else 'row 3'. */
  place: string
}

export interface FoundCondition {
  key: string
  value: number | string
  /** Where in the file it stands: 'row 3', 'cell B3', 'the head of column C'. */
  place: string
  /** As it stands there. */
  text: string
}

/** Signs of a line that are looked at: a line about the conditions is short, and searching a long one backwards is slow. */
const LONGEST = 1_000
/** Lines about the conditions are few; what more stands around a table is words. */
const MOST_LINES = 1_000

export function readMetadata(records: readonly TableRecord[], delimiter: Delimiter): MetadataLine[] {
  return records.filter(record => record.cells.some(cell => cell !== '')).slice(0, MOST_LINES).map(record => readLine(record, delimiter))
}

function readLine(record: TableRecord, delimiter: Delimiter): MetadataLine {
  const { row } = record
  const raw = trimMarks(record.raw.slice(0, LONGEST), delimiter)
  const sign = /[:=]/.exec(raw)
  const cut = raw.indexOf(delimiter)
  const index = record.cells.findIndex((cell, i) => i > 0 && cell !== '')
  if (index > 0 && cut >= 0 && (sign === null || cut <= sign.index)) {
    const value = record.cells.slice(index).filter(cell => cell !== '').join(' ')
    return { row, column: index + 1, key: trimMarks(record.cells[0] ?? '', delimiter), value, place: `cell ${cellName(row, index + 1)}` }
  }
  if (sign === null) return { row, column: 1, key: null, value: raw, place: `row ${row}` }
  const value = raw.slice(sign.index + 1).replaceAll('"', '').split(delimiter).map(part => part.trim()).filter(part => part !== '')
  const joined = value.join(delimiter === ',' && value.length === 2 && value.every(part => /^\d/.test(part)) ? ',' : ' ')
  const ownCell = raw[sign.index + 1] === delimiter
  return { row, column: ownCell ? 2 : 1, key: raw.slice(0, sign.index).trim(), value: joined, place: ownCell ? `cell ${cellName(row, 2)}` : `row ${row}` }
}

/** Without comment signs, quotation marks around the line and empty cells behind it. */
function trimMarks(raw: string, delimiter: Delimiter): string {
  let text = raw.trim().replace(/^["\s]*[#%*;]*\s*/, '').replace(/["\s]+$/, '')
  while (text.endsWith(delimiter)) text = text.slice(0, -1).trimEnd()
  return text
}

/** Conditions that lines above the table carry. A line that names a condition but cannot be read for it is a problem. */
export function findConditions(lines: readonly MetadataLine[], specs: readonly ConditionSpec[]): { found: FoundCondition[], problems: UploadProblem[] } {
  const found: FoundCondition[] = []
  const problems: UploadProblem[] = []
  for (const line of lines) {
    if (line.key === null || line.value === '') continue
    const match = matchCondition(line.key, specs)
    if (match === null) continue
    const values = readValue(line, match)
    if (values === null) problems.push(unreadable(line, match.spec))
    else for (const { key, value } of values) found.push({ key, value, place: line.place, text: line.value })
  }
  return { found, problems }
}

/** Value of the first line whose key names a column of this role: 'Agent: SK-07'. */
export function findNamed(lines: readonly MetadataLine[], role: ColumnSpec['role'], specs: readonly ColumnSpec[]): string | null {
  const words = specs.filter(spec => spec.role === role).flatMap(spec => spec.synonyms)
  const line = lines.find(candidate => candidate.key !== null && candidate.value !== '' && words.includes(plainWords(candidate.key)))
  return line?.value ?? null
}

/** Code of a tube sheet that a line names: 'Tube sheet: TS-7K3M9Q', or the code alone. */
export function findSheetCode(lines: readonly MetadataLine[]): string | null {
  const line = lines.find(({ key, value }) => CODE.test(value) && (key === null || ['tube sheet', 'tubesheet', 'sheet', 'tube list'].includes(plainWords(key))))
  return line === undefined ? null : CODE.exec(line.value)?.[0].toUpperCase() ?? null
}

const CODE = /\bTS-[0-9A-Z]{4,10}\b/i

interface ConditionMatch {
  spec: ConditionSpec
  /** Unit written with the key, or the stored one where the key is our own ('temperature_K'). */
  unitText: string | null
}

function matchCondition(key: string, specs: readonly ConditionSpec[]): ConditionMatch | null {
  const own = specs.find(candidate => candidate.key.toLowerCase() === key.toLowerCase())
  if (own) return { spec: own, unitText: storedUnit(own.dimension ?? 'none').symbol }
  for (const reading of headerReadings(key)) {
    const words = plainWords(reading.name)
    const spec = specs.find(candidate => candidate.synonyms.includes(words) || plainWords(candidate.label) === words)
    if (spec) return { spec, unitText: reading.unit }
  }
  return null
}

function readValue(line: MetadataLine, { spec, unitText }: ConditionMatch): { key: string, value: number | string }[] | null {
  if (spec.type === 'text') return [{ key: spec.key, value: line.value.slice(0, 500) }]
  if (spec.type === 'date') return single(spec.key, readDate(line.value))
  if (spec.type === 'choice') return withWords(single(spec.key, readChoice(line.value, spec)), line.value, spec)
  return readNumbers(line.value, spec, unitText)
}

function single(key: string, value: string | null): { key: string, value: string }[] | null {
  return value === null ? null : [{ key, value }]
}

/** Words of the file that say more than the choice they were read as are kept beside it. */
function withWords(values: { key: string, value: string }[] | null, text: string, { wordsKey, choices }: ConditionSpec): { key: string, value: string }[] | null {
  const isPlain = choices?.some(choice => [choice.value, choice.label].some(name => plainWords(name) === plainWords(text)))
  return values === null || wordsKey === undefined || isPlain ? values : [...values, { key: wordsKey, value: text.slice(0, 500) }]
}

/** A day written without doubt: 2026-11-30, or 30.11.2026. With slashes day and month cannot be told apart. */
export function readDate(text: string): string | null {
  const iso = /^(\d{4})-(\d{2})-(\d{2})(?:[T ].*)?$/.exec(text.trim())
  const dotted = /^(\d{1,2})\.(\d{1,2})\.(\d{4})(?: .*)?$/.exec(text.trim())
  const [year, month, day] = iso ? [iso[1], iso[2], iso[3]] : dotted ? [dotted[3], dotted[2], dotted[1]] : []
  if (year === undefined || month === undefined || day === undefined) return null
  const date = `${year}-${month.padStart(2, '0')}-${day.padStart(2, '0')}`
  const parsed = new Date(`${date}T00:00:00Z`)
  return Number.isNaN(parsed.getTime()) || parsed.toISOString().slice(0, 10) !== date ? null : date
}

function readChoice(text: string, spec: ConditionSpec): string | null {
  const words = plainWords(text)
  const choice = spec.choices?.find(candidate =>
    plainWords(candidate.value) === words || plainWords(candidate.label) === words || candidate.synonyms?.includes(words))
  return choice?.value ?? null
}

function readNumbers(text: string, spec: ConditionSpec, unitText: string | null): { key: string, value: number }[] | null {
  const match = /^([-+\u2212]?[\d.,]+(?:[eE][-+\u2212]?\d+)?)\s*(?:(?:±|\+\/-|\+-)\s*([\d.,]+))?\s*(.*)$/.exec(text.trim())
  const value = match ? parseLooseNumber(match[1] ?? '') : null
  const unit = unitFor(match?.[3]?.trim() || unitText, spec)
  if (!value?.ok || unit === null) return null
  const main = { key: spec.key, value: toStored(value.value, unit) }
  const sd = match?.[2] === undefined ? null : parseLooseNumber(match[2])
  if (sd === null || spec.sdKey === undefined) return sd === null ? [main] : null
  return sd.ok ? [main, { key: spec.sdKey, value: difference(sd.value, unit) }] : null
}

/** A difference in the stored unit, without the offset of its scale and without the digits that subtracting it leaves behind. */
function difference(value: number, unit: Unit): number {
  return Number((toStored(value, unit) - toStored(0, unit)).toPrecision(12))
}

function unitFor(text: string | null, spec: ConditionSpec): Unit | null {
  const dimension = spec.dimension ?? 'none'
  if (text === null || text === '') return spec.shownUnit === undefined ? storedUnit(dimension) : findUnit(spec.shownUnit, dimension)
  return findUnit(text, dimension)
}

function unreadable(line: MetadataLine, spec: ConditionSpec): UploadProblem {
  return asks('metadata', `${spec.label}: ${quoted(line.value)} cannot be read, so the form is left open.`, acceptedFor(spec),
    { row: line.row, column: line.column, field: `conditions.${spec.key}` })
}

/** What a condition's field takes, in words. */
export function acceptedFor(spec: ConditionSpec): string {
  if (spec.type === 'choice') return `one of: ${(spec.choices ?? []).map(choice => choice.label).join('; ')}`
  if (spec.type === 'date') return 'a day such as 2026-11-30'
  if (spec.type === 'text') return 'a few words'
  return spec.shownUnit ? `a number in ${spec.shownUnit}` : 'a number'
}

import type { ColumnSpec, MeasurementKind } from '../types'
import { findUnit, matchHeader, plainWords, type HeaderMatch } from './headerText'
import { readWithUnit } from './cellUnit'
import { parseNumberCell, type DecimalMark } from './numberCell'
import { filledCells, isBlank, type TableRecord } from './records'
import type { Unit } from '../../science/units'

export type Layout = MeasurementKind['layouts'][number]

const HEADER_ROWS_LOOKED_AT = 60

/** A number across the head of a table: '50', '50 ms', 'TI = 50 ms'. */
export interface HeadNumber { text: string, unit: Unit | null, unitText: string | null }

/** Reads a head that is a value of this column, as times are where every tube has a row. */
export function readHeadNumber(text: string, spec: ColumnSpec, decimal: DecimalMark): HeadNumber | null {
  if (text.length > 60) return null
  const match = /^(.*?)[\s=:_]*([-+\u2212]?\d[\d.,]*(?:[eE][-+]?\d+)?)[\s_]*(\D*)$/.exec(text.trim())
  if (!match || spec.dimension === 'text') return null
  const [, words = '', number = '', unitText = ''] = match
  if (words.trim() !== '' && !spec.synonyms.includes(plainWords(words))) return null
  if (!parseNumberCell(number, decimal).ok) return null
  const plainUnit = unitText.replace(/[()[\]]/g, '').trim()
  if (plainUnit === '') return { text: number, unit: null, unitText: null }
  const unit = findUnit(plainUnit, spec.dimension)
  return unit === null ? null : { text: number, unit, unitText: plainUnit }
}

/** Heads of a row matched to columns; words that fit two columns are settled by what the others are. */
export function matchHeaders(cells: readonly string[], specs: readonly ColumnSpec[]): (HeaderMatch | null)[] {
  const first = cells.map(cell => matchHeader(cell, specs))
  const present = first.flatMap(match => match && match.spec.follows === undefined ? [match.spec.stem] : [])
  return cells.map(cell => matchHeader(cell, specs, present))
}

export const specsOf = (kind: MeasurementKind, role: ColumnSpec['role']): ColumnSpec[] => kind.columns.filter(spec => spec.role === role)

/** Index of the record that heads the table; null where none does. */
export function findHeader(records: readonly TableRecord[], kind: MeasurementKind, decimal: DecimalMark): number | null {
  let best: { index: number, score: number } | null = null
  const filled = records.slice(0, HEADER_ROWS_LOOKED_AT)
  for (const [index, record] of filled.entries()) {
    const score = headerScore(record, records.slice(index + 1, index + 6), kind, decimal)
    if (score > 0 && (best === null || score > best.score)) best = { index, score }
  }
  return best?.index ?? null
}

function headerScore(record: TableRecord, below: readonly TableRecord[], kind: MeasurementKind, decimal: DecimalMark): number {
  const filled = filledCells(record)
  if (filled < 2) return 0
  const numbers = record.cells.filter(cell => parseNumberCell(cell, decimal).ok).length
  if (parseNumberCell(record.cells[0] ?? '', decimal).ok && numbers > filled / 2) return 0
  const roles = new Set(matchHeaders(record.cells, kind.columns).flatMap(match => match ? [match.spec.role] : []))
  const times = specsOf(kind, 'x').some(spec => record.cells.filter(cell => readHeadNumber(cell, spec, decimal)).length >= 3)
  const main = (roles.has('x') ? 5 : 0) + (roles.has('y') ? 4 : 0) + (times ? 3 : 0)
  const other = [...roles].filter(role => role !== 'x' && role !== 'y').length
  const isLast = !below.some(next => !isBlank(next))
  if (main + other === 0 || (isLast && main === 0)) return 0
  // 'Mean' heads a column of signals, and a row of means beneath a table of them.
  if (isLast && numbers >= filled / 2 && specsOf(kind, 'x').length > 0) return 0
  const width = Math.max(0, ...below.map(filledCells))
  return main + other + (filled >= 0.8 * width ? 2 : 0)
}

/** How the table is laid out, from its heads and first rows. */
export function guessLayout(input: { kind: MeasurementKind, header: TableRecord | null, matches: readonly (HeaderMatch | null)[], body: readonly TableRecord[], decimal: DecimalMark }): Layout {
  const { kind, matches, body, decimal } = input
  const xSpecs = specsOf(kind, 'x')
  const count = (role: ColumnSpec['role']) => matches.filter(match => match?.spec.role === role).length
  if (xSpecs.length === 0) return isTransposed(input) ? 'columnPerTube' : 'long'
  const names = count('tube') + count('agent') + count('batch') + count('conc')
  if (body.length === 0) return count('y') > 0 ? 'long' : 'columnPerTube'
  const xAt = matches.findIndex(match => match?.spec.role === 'x')
  const isNumeric = (column: number) => numericShare(body, { column, decimal, specs: xSpecs }) > 0.5
  if (xAt >= 0 && count('y') > 0 && (names > 0 || count('y') === 1)) return 'long'
  if (xAt >= 0) return isNumeric(xAt) ? 'columnPerTube' : 'rowPerTube'
  const times = (input.header?.cells ?? []).filter(cell => xSpecs.some(spec => readHeadNumber(cell, spec, decimal) !== null)).length
  if (times >= 3 && (names > 0 || !isNumeric(0))) return 'rowPerTube'
  return isNumeric(0) ? 'columnPerTube' : 'rowPerTube'
}

/** A table of results with a column per tube has its heads down the first column. */
function isTransposed({ kind, matches, header, body }: { kind: MeasurementKind, matches: readonly (HeaderMatch | null)[], header: TableRecord | null, body: readonly TableRecord[] }): boolean {
  const stems = (list: readonly (HeaderMatch | null)[]) => new Set(list.flatMap(match => match ? [match.spec.stem] : [])).size
  const rows = header === null ? body : [header, ...body]
  const down = rows.slice(0, 20).flatMap(record => matchHeader(record.cells[0] ?? '', kind.columns) ?? [])
  // A tube can be called 't1', as a time is: the direction that names more different things is the head.
  return down.some(match => match.spec.role === 'y') && stems(down) >= 2 && stems(down) > stems(matches)
}

/** Share of cells that are numbers, alone or with a unit of one of these columns. */
function numericShare(body: readonly TableRecord[], { column, decimal, specs }: { column: number, decimal: DecimalMark, specs: readonly ColumnSpec[] }): number {
  const cells = body.slice(0, 50).map(record => record.cells[column] ?? '').filter(cell => cell !== '')
  return cells.length === 0 ? 0 : cells.filter(cell => parseNumberCell(cell, decimal).ok || specs.some(spec => readWithUnit(cell, spec, decimal) !== null)).length / cells.length
}

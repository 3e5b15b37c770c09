import { storedUnit, type Unit } from '../../science/units'
import type { UploadDraft } from '../draft'
import type { ColumnSpec, MeasurementKind, UploadProblem } from '../types'
import { readWithUnit } from './cellUnit'
import { findUnit, type HeaderMatch } from './headerText'
import { matchHeaders, specsOf, type Layout } from './layout'
import { columnLetter } from './place'
import { asks, blocks, quoted } from './problem'
import type { TableRecord } from './records'

export type How = 'from the header' | 'chosen' | 'guessed'

/** How one column of the file is read. spec null = it is not read. */
export interface ReadColumn {
  /** From 0. */
  index: number
  header: string
  spec: ColumnSpec | null
  unit: Unit | null
  how: How
  /** In wide layouts: the column is a tube, or one value of every tube. */
  isTube: boolean
}

interface Input {
  kind: MeasurementKind
  header: TableRecord | null
  body: readonly TableRecord[]
  /** A row of units beneath the head. */
  unitRow: TableRecord | null
  width: number
  layout: Layout
  /** A kind without x and with a column per tube has its heads down the first column. */
  isTransposed: boolean
  draft: UploadDraft
}

/** Maps the columns of a table: what the person chose, then what the heads say, then what the layout suggests. */
export function readColumns(input: Input): ReadColumn[] {
  const cells = Array.from({ length: input.width }, (_, index) => input.header?.cells[index] ?? '')
  const matches = input.isTransposed ? cells.map(() => null) : matchHeaders(cells, input.kind.columns)
  const columns = cells.map((header, index) => fromHeader(header, index, matches[index] ?? null, input))
  return columns.map(column => withUnits(column, columns, input))
}

function fromHeader(header: string, index: number, match: HeaderMatch | null, input: Input): ReadColumn {
  const { kind, layout, draft } = input
  const choice = draft.columns?.find(candidate => candidate.index === index)
  const base = { index, header, unit: match?.unit ?? null }
  const y = specsOf(kind, 'y')[0] ?? null
  const x = specsOf(kind, 'x')[0] ?? null
  if (choice !== undefined) {
    const spec = choice.stem === null ? null : kind.columns.find(candidate => candidate.stem === choice.stem) ?? null
    const isTube = layout !== 'long' && spec?.role === 'y'
    return { ...base, unit: spec === match?.spec ? base.unit : null, spec, how: 'chosen', isTube }
  }
  if (layout === 'columnPerTube') {
    if (input.isTransposed) return { ...base, spec: index === 0 ? null : y, how: 'from the header', isTube: index > 0 }
    if (match?.spec.role === 'x') return { ...base, spec: match.spec, how: 'from the header', isTube: false }
    if ((match?.spec.role === 'tube' || /^(?:#|№|row|index|i)$/i.test(header)) && onlyCounts(index, input.body)) return { ...base, spec: null, how: 'guessed', isTube: false }
    if (index === 0 && !matchesRole(input, 'x')) return { ...base, spec: x, how: 'guessed', isTube: false }
    return { ...base, unit: null, spec: header === '' && input.header !== null ? null : y, how: 'from the header', isTube: header !== '' || input.header === null }
  }
  if (layout === 'rowPerTube' && (match === null || match.spec.role === 'y')) return { ...base, unit: null, spec: null, how: 'guessed', isTube: false }
  if (layout === 'rowPerTube' && match?.spec.role === 'x') return { ...base, spec: null, how: 'from the header', isTube: false }
  return { ...base, spec: match?.spec ?? null, how: match ? 'from the header' : 'guessed', isTube: false }
}

/** A column that numbers the rows, headed '#' or 'no'. */
function onlyCounts(index: number, body: readonly TableRecord[]): boolean {
  const cells = body.map(record => record.cells[index] ?? '')
  return cells.length > 1 && cells.every((cell, i) => cell === String(i + 1) || cell === String(i))
}

function matchesRole({ header, kind }: Input, role: ColumnSpec['role']): boolean {
  return header !== null && matchHeaders(header.cells, kind.columns).some(match => match?.spec.role === role)
}

function withUnits(column: ReadColumn, columns: readonly ReadColumn[], { draft, unitRow, body }: Input): ReadColumn {
  const { spec } = column
  if (spec === null || spec.dimension === 'text') return { ...column, unit: null }
  const chosen = draft.columns?.find(candidate => candidate.index === column.index)?.unit ?? null
  if (chosen !== null) return { ...column, unit: findUnit(chosen, spec.dimension) }
  const below = unitRow === null ? null : findUnit(unitRow.cells[column.index] ?? '', spec.dimension)
  return { ...column, unit: column.unit ?? below ?? followedUnit(spec, columns) ?? unitlessUnit(spec) ?? unitInCells(column.index, spec, body) }
}

/** The unit that every filled cell looked at carries itself; each is read in its own. */
function unitInCells(index: number, spec: ColumnSpec, body: readonly TableRecord[]): Unit | null {
  const cells = body.slice(0, 50).map(record => record.cells[index] ?? '').filter(cell => cell !== '')
  const units = cells.map(cell => (readWithUnit(cell, spec, 'point') ?? readWithUnit(cell, spec, 'comma'))?.unit ?? null)
  return units.every(unit => unit !== null) ? units[0] ?? null : null
}

/** An error without a unit of its own is in the unit of the column it belongs to. */
function followedUnit(spec: ColumnSpec, columns: readonly ReadColumn[]): Unit | null {
  if (spec.follows === undefined) return null
  const followed = columns.find(column => column.spec?.stem === spec.follows)
  return followed?.unit && followed.unit.dimension === spec.dimension ? followed.unit : null
}

/** Signals, fractions and pure numbers need no unit; times and concentrations do. */
export function unitlessUnit(spec: ColumnSpec): Unit | null {
  if (spec.bare && spec.dimension !== 'text') return storedUnit(spec.dimension)
  return spec.dimension === 'signal' || spec.dimension === 'none' || spec.dimension === 'fraction' ? storedUnit(spec.dimension) : null
}

/** Two columns for one thing, one for a tube twice, a required one missing, a unit missing. */
export function columnProblems(columns: readonly ReadColumn[], { kind, header, layout }: Input): UploadProblem[] {
  const row = header?.row ?? null
  const problems: UploadProblem[] = []
  const seen = new Map<string, ReadColumn>()
  const isCompared = (column: ReadColumn) => column.spec !== null && !(column.isTube && layout === 'rowPerTube')
  for (const column of columns.filter(isCompared)) {
    const name = column.isTube ? `tube ${column.header.toLowerCase()}` : column.spec?.stem ?? ''
    const earlier = seen.get(name)
    if (earlier && (!column.isTube || column.header !== '')) problems.push(duplicate(column, earlier, row))
    seen.set(name, earlier ?? column)
    if (!column.isTube) problems.push(...unitProblem(column, row))
  }
  if (layout === 'long') problems.push(...missingColumns(kind, columns, row))
  return problems
}

function duplicate(column: ReadColumn, earlier: ReadColumn, row: number | null): UploadProblem {
  const letters = `${columnLetter(earlier.index)} and ${columnLetter(column.index)}`
  const where = { row, column: column.index + 1, field: `columns.${column.index}` }
  if (column.isTube && /^[\d.,\s]+$/.test(column.header)) {
    return asks('duplicateHeader', `Columns ${letters} have the same head ${quoted(column.header)}: they are read as two tubes.`, 'a name of its own for each tube, or both as they are', where)
  }
  const accepted = column.isTube ? 'a name of its own for each tube' : `one column of ${column.spec?.label ?? ''}; choose "not read" for the other`
  return blocks('duplicateHeader', `Columns ${letters} are both ${column.isTube ? `headed ${quoted(column.header)}` : `read as ${column.spec?.label ?? ''}`}.`, accepted, where)
}

function unitProblem({ spec, unit, index, header }: ReadColumn, row: number | null): UploadProblem[] {
  if (spec === null || spec.dimension === 'text' || unit !== null) return []
  return [blocks('unit', `${spec.label}: the head ${quoted(header)} names no unit that is known for it.`, acceptedUnits(spec), { row, column: index + 1, field: `columns.${index}.unit` })]
}

export function acceptedUnits(spec: ColumnSpec): string {
  return spec.dimension === 'time' ? 'choose s, ms or µs, or write it in the head: TI (ms)' : `choose a unit of ${spec.dimension}, or write it in the head: ${spec.label} (${spec.dimension === 'text' ? '' : storedUnit(spec.dimension).symbol})`
}

function missingColumns(kind: MeasurementKind, columns: readonly ReadColumn[], row: number | null): UploadProblem[] {
  const stems = columns.flatMap(column => column.spec ? [column.spec] : [])
  const roles: ColumnSpec['role'][] = ['x', 'y']
  return roles.flatMap((role) => {
    const specs = specsOf(kind, role)
    if (specs.length === 0 || stems.some(spec => spec.role === role)) return []
    const labels = specs.map(spec => spec.label).join(' or ')
    return [blocks('missingColumn', `No column is read as ${labels}.`, `a head such as ${specs.map(spec => quoted(spec.synonyms[0] ?? '')).join(' or ')}, or the column chosen`, { row })]
  })
}

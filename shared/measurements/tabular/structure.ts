import { parseUnit } from '../../science/units'
import type { UploadDraft } from '../draft'
import type { MeasurementKind, UploadProblem } from '../types'
import { unitlessUnit } from './columns'
import { findUnit, matchHeader } from './headerText'
import { findHeader, guessLayout, matchHeaders, specsOf, type Layout } from './layout'
import { UPLOAD_LIMITS } from './limits'
import { parseNumberCell, type DecimalMark } from './numberCell'
import { blocks } from './problem'
import { filledCells, isBlank, type TableRecord } from './records'
import { partTail } from './tail'
import type { AttributeRow } from './wideTubes'

/** The parts of a table: lines above it, its head, rows that say something of every tube, and the rows of values. */
export interface TableStructure {
  header: TableRecord | null
  unitRow: TableRecord | null
  attributes: AttributeRow[]
  body: TableRecord[]
  /** Rows of sums and means beneath the values. */
  summaries: TableRecord[]
  /** Lines that are not part of the table. */
  around: TableRecord[]
  width: number
  layout: Layout
  /** Heads stand in the first column, one tube in every other. */
  isTransposed: boolean
}

export interface StructureInput { records: readonly TableRecord[], kind: MeasurementKind, decimal: DecimalMark, draft: UploadDraft }

/** A line behind #, unless it is the head of the table. */
function isComment(record: TableRecord, kind: MeasurementKind): boolean {
  if (!/^\s*"?#/.test(record.raw)) return false
  return !(filledCells(record) >= 2 && matchHeaders(record.cells, kind.columns).some(match => match?.spec.role === 'x' || match?.spec.role === 'y'))
}

export function findStructure(input: StructureInput): TableStructure {
  const { kind, decimal, draft } = input
  const filled = input.records.filter(record => !isBlank(record))
  const comments = filled.filter(record => isComment(record, kind))
  const records = filled.filter(record => !isComment(record, kind))
  const headerIndex = pickHeader({ ...input, records })
  const start = headerIndex ?? firstValues(records, decimal)
  const found = headerIndex === null ? null : records[headerIndex] ?? null
  const spread = found === null ? null : spreadHead(found, records[start + 1], input)
  const header = spread ?? found
  const below = records.slice(headerIndex === null ? start : start + (spread === null ? 1 : 2))
  const matches = header === null ? [] : matchHeaders(header.cells, kind.columns)
  const layout = draft.layout ?? guessLayout({ kind, header, matches, body: below, decimal })
  const isTransposed = layout === 'columnPerTube' && specsOf(kind, 'x').length === 0
  const parted = layout === 'columnPerTube'
    ? partAttributes({ above: records.slice(0, start), header, below, isTransposed }, input)
    : { attributes: [], body: below, around: records.slice(0, start) }
  const unitRow = isTransposed ? null : findUnitRow(parted.body[0], kind)
  const width = lastFilled([...(header ? [header] : []), ...parted.attributes.map(attribute => attribute.record), ...(header ? [] : parted.body.slice(0, 50))])
  const tail = partTail(unitRow === null ? parted.body : parted.body.slice(1), { width, decimal, layout })
  return {
    header: isTransposed ? null : header, unitRow, layout, isTransposed, attributes: parted.attributes,
    body: tail.body, summaries: tail.summaries,
    around: [...comments, ...parted.around, ...tail.remarks].sort((a, b) => a.row - b.row),
    width,
  }
}

function pickHeader({ records, kind, decimal, draft }: StructureInput): number | null {
  if (draft.headerRow === null) return null
  if (draft.headerRow === undefined) return findHeader(records, kind, decimal)
  const index = records.findIndex(record => record.row === draft.headerRow)
  return index < 0 ? null : index
}

/** A head over two rows: 'TI (ms)' once, and the times themselves beneath it and to its right. Joined into one row; null where the head is no such one. */
function spreadHead(head: TableRecord, next: TableRecord | undefined, { kind, decimal }: StructureInput): TableRecord | null {
  const at = matchHeaders(head.cells, kind.columns).findIndex(match => match?.spec.role === 'x')
  const stacked = next === undefined || at < 0 ? null : stackedHead({ head, next, at }, decimal)
  if (stacked !== null) return stacked
  if (next === undefined || at < 1 || head.cells.slice(at + 1).some(cell => cell !== '') || next.cells.slice(0, at).some(cell => cell !== '')) return null
  const times = next.cells.slice(at)
  if (filledCells({ ...next, cells: times }) < 3 || !times.every(cell => cell === '' || parseNumberCell(cell, decimal).ok)) return null
  const unit = matchHeader(head.cells[at] ?? '', kind.columns)?.unit?.symbol ?? ''
  return { row: next.row, raw: next.raw, cells: [...head.cells.slice(0, at), ...times.map(time => `${time} ${unit}`.trim())] }
}

/** A head over two rows: one word over all tubes, and their names beneath it; the column of times is headed in the first row or in both. */
function stackedHead({ head, next, at }: { head: TableRecord, next: TableRecord, at: number }, decimal: DecimalMark): TableRecord | null {
  const x = head.cells[at] ?? ''
  const beneath = next.cells[at] ?? ''
  const names = next.cells.filter((cell, index) => index !== at && cell !== '')
  const titles = head.cells.filter((cell, index) => index !== at && cell !== '')
  const areNames = names.length >= 2 && names.length > titles.length && names.every(cell => !parseNumberCell(cell, decimal).ok)
  return areNames && (beneath === '' || beneath === x) ? { ...next, cells: Array.from({ length: Math.max(head.cells.length, next.cells.length) }, (_, index) => index === at ? x : next.cells[index] ?? '') } : null
}

/** Without a head the table begins at the first line with at least two cells, one of them a number. */
function firstValues(records: readonly TableRecord[], decimal: DecimalMark): number {
  const index = records.findIndex(record => filledCells(record) >= 2 && parseNumberCell(record.cells[0] ?? '', decimal).ok)
  return Math.max(0, index)
}

function lastFilled(records: readonly TableRecord[]): number {
  return records.reduce((width, record) => Math.max(width, record.cells.findLastIndex(cell => cell !== '') + 1), 0)
}

interface Parting { above: readonly TableRecord[], header: TableRecord | null, below: readonly TableRecord[], isTransposed: boolean }

/** Takes the rows that describe tubes from above and below the head of a table with a column per tube. */
function partAttributes({ above, header, below, isTransposed }: Parting, { kind, draft }: StructureInput): { attributes: AttributeRow[], body: TableRecord[], around: TableRecord[] } {
  const roles = ['tube', 'agent', 'batch', 'conc', 'concError', 'aux', ...(isTransposed ? ['y', 'sigma'] : [])]
  const present = below.flatMap(record => matchHeader(record.cells[0] ?? '', kind.columns)?.spec.stem ?? [])
  const width = filledCells(header ?? below[0] ?? { row: 0, cells: [], raw: '' })
  const read = (record: TableRecord): AttributeRow | null => {
    const match = matchHeader(record.cells[0] ?? '', kind.columns, present)
    if (match === null || !roles.includes(match.spec.role)) return null
    const isResult = match.spec.role === 'y' || match.spec.role === 'sigma'
    // one cell is a line about all tubes, such as 'Acid: 0.1 M'
    if ((filledCells(record) < 2 || (filledCells(record) < 3 && width > 2)) && !isResult) return null
    const chosen = draft.units?.[match.spec.stem]
    const unit = chosen && match.spec.dimension !== 'text' ? findUnit(chosen, match.spec.dimension) : match.unit ?? (match.unknownUnit === null && match.spec.role === 'aux' ? unitlessUnit(match.spec) : null)
    return { record, spec: match.spec, unit }
  }
  const before = above.map(read)
  const firstAbove = before.length - [...before].reverse().findIndex(row => row === null)
  const kept = before.includes(null) ? before.slice(firstAbove) : before
  const all = isTransposed && header !== null ? [header, ...below] : below
  const after = all.map(read)
  const stop = after.findIndex(row => row === null)
  const count = stop < 0 ? after.length : stop
  const found = (rows: (AttributeRow | null)[]) => rows.flatMap(row => row ?? [])
  return { attributes: withFollowedUnits([...found(kept), ...found(after.slice(0, count))]), body: all.slice(count), around: above.slice(0, above.length - kept.length) }
}

/** An error row without a unit is in the unit of the row it belongs to. */
function withFollowedUnits(rows: readonly AttributeRow[]): AttributeRow[] {
  return rows.map((row) => {
    const followed = rows.find(candidate => candidate.spec.stem === row.spec.follows)
    return row.unit === null && followed?.unit?.dimension === row.spec.dimension ? { ...row, unit: followed.unit } : row
  })
}

/** A row beneath the head that holds nothing but units. */
function findUnitRow(record: TableRecord | undefined, kind: MeasurementKind): TableRecord | null {
  if (record === undefined) return null
  const filled = record.cells.filter(cell => cell !== '')
  const dimensions = kind.columns.flatMap(spec => spec.dimension === 'text' ? [] : [spec.dimension])
  const plain = (cell: string) => cell.replace(/^[([]|[)\]]$/g, '')
  const isUnit = (cell: string) => /\D/.test(cell) && dimensions.some(dimension => parseUnit(plain(cell), dimension).ok)
  if (filled.length === 0 || !filled.every(isUnit)) return null
  return { ...record, cells: record.cells.map(plain) }
}

/** Rows that hold more than the head has room for: most often a decimal comma that was taken for the mark between columns. */
export function widthProblems({ body, width, header }: TableStructure): UploadProblem[] {
  if (header === null) return []
  return body.filter(record => record.cells.findLastIndex(cell => cell !== '') >= width).slice(0, UPLOAD_LIMITS.keptProblems).flatMap((record) => {
    const last = record.cells.findLastIndex(cell => cell !== '')
    return [blocks('extraCells', `The row has ${last + 1} cells, the head only ${width}.`,
      'as many cells as the head has; with decimal commas, semicolons or tabs between columns', { row: record.row, column: width + 1 })]
  })
}


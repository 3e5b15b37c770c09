import { cellName } from '../tabular/place'
import { asks, blocks, quoted } from '../tabular/problem'
import { isNumberInEither, parseNumberCell, type DecimalMark } from '../tabular/numberCell'
import { readMetadata, type MetadataLine } from '../tabular/metadata'
import type { TableRecord } from '../tabular/records'
import type { UploadProblem } from '../types'
import type { SheetGrid } from './types'

/** A workbook as the reading of tables takes it: the records of one sheet, and what other sheets say of the measurement. */
export interface WorkbookTable {
  sheet: string
  sheets: string[]
  records: TableRecord[]
  decimal: DecimalMark
  /** Lines of sheets that hold pairs of a name and a value. */
  lines: MetadataLine[]
  problems: UploadProblem[]
}

const SHOWN_CELLS = 8

/** @param chosen name of the sheet a person chose; without one, the sheet with most numbers is taken */
export function workbookTable(sheets: readonly SheetGrid[], chosen: string | undefined): WorkbookTable {
  const sheet = sheets.find(one => one.name === chosen) ?? largestSheet(sheets)
  const problems: UploadProblem[] = []
  if (chosen !== undefined && sheet.name !== chosen) problems.push(blocks('sheet', `The workbook has no sheet ${quoted(chosen)}.`, sheets.map(one => quoted(one.name)).join(', '), { field: 'sheet' }))
  const decimal = markOf(sheet)
  const records = sheet.rows.map((cells, i) => recordOf(cells, i + 1, decimal))
  const others = sheets.filter(one => one !== sheet && isPairs(one))
  return {
    sheet: sheet.name, sheets: sheets.map(one => one.name), records, decimal, problems: [...problems, ...formulaProblems(sheet), ...errorProblems(sheet)],
    lines: others.flatMap(one => linesOf(one)),
  }
}

function largestSheet(sheets: readonly SheetGrid[]): SheetGrid {
  const numbers = (sheet: SheetGrid) => sheet.rows.reduce((sum, row) => sum + row.filter(cell => typeof cell === 'number' || (typeof cell === 'string' && isNumberInEither(cell))).length, 0)
  const visible = sheets.filter(sheet => !sheet.isHidden)
  const [first, ...rest] = visible.length > 0 ? visible : sheets
  if (first === undefined) throw new Error('A workbook was read without a sheet.')
  return rest.reduce((best, sheet) => numbers(sheet) > numbers(best) ? sheet : best, first)
}

/** Numbers kept as text decide the mark that all are written with; stored numbers have none of their own. */
function markOf({ rows }: SheetGrid): DecimalMark {
  const texts = rows.flat().filter(cell => typeof cell === 'string' && /[.,]/.test(cell))
  const count = (mark: DecimalMark) => texts.filter(cell => parseNumberCell(String(cell), mark).ok).length
  return count('comma') > count('point') ? 'comma' : 'point'
}

function recordOf(cells: SheetGrid['rows'][number], row: number, decimal: DecimalMark): TableRecord {
  const texts = cells.map(cell => cellText(cell, decimal))
  return { row, cells: texts, raw: texts.join('\t') }
}

function cellText(cell: string | number | boolean | null, decimal: DecimalMark): string {
  if (cell === null) return ''
  if (typeof cell === 'number') return decimal === 'comma' ? String(cell).replace('.', ',') : String(cell)
  return typeof cell === 'boolean' ? (cell ? 'yes' : 'no') : cell.replace(/\s+/g, ' ').trim()
}

/** A sheet of two filled columns with a word in the first. */
function isPairs({ rows }: SheetGrid): boolean {
  const filled = rows.map(row => row.filter(cell => cell !== null && cell !== '')).filter(row => row.length > 0)
  return filled.length > 0 && filled.length <= 200 && filled.every(row => row.length <= 3) && filled.filter(row => typeof row[0] === 'string').length >= 0.8 * filled.length
}

function linesOf(sheet: SheetGrid): MetadataLine[] {
  const decimal = markOf(sheet)
  const records = sheet.rows.map((cells, i) => recordOf(cells, i + 1, decimal))
  return readMetadata(records, '\t').map(line => ({ ...line, place: `sheet ${quoted(sheet.name)}, ${line.place}` }))
}

function formulaProblems({ formulas }: SheetGrid): UploadProblem[] {
  const empty = formulas.filter(cell => !cell.hasValue)
  const kept = formulas.filter(cell => cell.hasValue)
  const problems = empty.map(({ row, column }) => blocks('formulaWithoutValue', `Cell ${cellName(row, column)} holds a formula and no value was stored with it.`, 'the workbook opened, calculated and saved again, or the value itself', { row, column }))
  const [first] = kept
  if (first === undefined) return problems
  const named = kept.slice(0, SHOWN_CELLS).map(cell => cellName(cell.row, cell.column)).join(', ')
  const more = kept.length > SHOWN_CELLS ? ` and ${kept.length - SHOWN_CELLS} more` : ''
  return [...problems, asks('formulas', `${kept.length === 1 ? 'One cell holds a formula' : `${kept.length} cells hold formulas`} (${named}${more}): the values stored with them are read.`, 'the values as they are, or the measured numbers in their place', { row: first.row, column: first.column })]
}

function errorProblems({ errors }: SheetGrid): UploadProblem[] {
  return errors.map(({ row, column, text }) => blocks('errorValue', `Cell ${cellName(row, column)} holds the error ${quoted(text)}.`, 'a number, or an empty cell where nothing was measured', { row, column }))
}

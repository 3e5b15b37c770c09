import type { UploadProblem } from '../types'
import { UPLOAD_LIMITS } from '../tabular/limits'
import { cellName } from '../tabular/place'
import { asks, blocks, note } from '../tabular/problem'
import { cleanCell, type TableRecord } from '../tabular/records'
import { cellText } from './cellText'
import type { SheetPart } from './parts'
import type { SheetScan } from './scanSheet'

/** A sheet as records, and what is to be said of its cells before anything is made of them. */
export interface SheetTable { name: string, isHidden: boolean, records: TableRecord[], problems: UploadProblem[] }

interface Input { scan: SheetScan, rows: readonly (readonly unknown[])[], percents: ReadonlySet<number> }

const NAMED_CELLS = 12

export function sheetTable({ name, isHidden }: SheetPart, { scan, rows, percents }: Input): SheetTable {
  const beyond = limitProblem(scan)
  if (beyond !== null) return { name, isHidden, records: [], problems: [beyond] }
  const problems: UploadProblem[] = [...formulaProblems(scan)]
  const errors = new Map(scan.errors.map(error => [cellName(error.row, error.column), error.text]))
  // An error at the end of a row or of the sheet has no value that the reader would keep a place for.
  const height = Math.max(rows.length, scan.rows)
  const records = Array.from({ length: height }, (_, i): TableRecord => {
    const width = Math.max(rows[i]?.length ?? 0, scan.columns)
    const cells = Array.from({ length: width }, (_, j) => {
      const place = cellName(i + 1, j + 1)
      const style = scan.styles.get(place)
      return cellText(rows[i]?.[j], { isError: errors.get(place) ?? null, isPercent: style !== undefined && percents.has(style) })
    })
    const texts = cells.map((cell, j) => cell.isNumber ? cell.text : cleanCell(cell.text.replaceAll(/[\t\r\n]+/g, ' '), { row: i + 1, column: j + 1 }, problems))
    return { row: i + 1, cells: texts, raw: texts.join('\t'), isNumber: cells.map(cell => cell.isNumber) }
  })
  note(problems, ...fillMerged(records, scan))
  return { name, isHidden, records, problems }
}

function limitProblem({ fault, rows, columns }: SheetScan): UploadProblem | null {
  if (fault !== null && (fault.row < 1 || fault.column < 1)) return blocks('brokenWorkbook', 'The sheet has a cell that stands in no row or no column.', 'the workbook saved once more by a spreadsheet program, or the sheet saved as CSV')
  if (fault !== null && fault.row > UPLOAD_LIMITS.rows) return blocks('tooManyRows', `The sheet has a cell in row ${fault.row}; the limit is ${UPLOAD_LIMITS.rows}.`, 'the table in several files', { row: fault.row })
  if (fault !== null) return blocks('tooManyColumns', `The sheet has a cell in column ${fault.column}; the limit is ${UPLOAD_LIMITS.columns}.`, 'the table in several files', { row: fault.row, column: fault.column })
  return rows * columns > UPLOAD_LIMITS.cells ? blocks('tooManyCells', `The sheet spans ${rows} rows and ${columns} columns; the limit is ${UPLOAD_LIMITS.cells} cells.`, 'the table in several files') : null
}

/** Values of formulas are the last that the sheet stored. A formula that has none was never calculated. */
function formulaProblems({ formulas }: SheetScan): UploadProblem[] {
  const stored = formulas.filter(formula => formula.hasValue)
  const first = stored[0]
  const names = stored.slice(0, NAMED_CELLS).map(({ row, column }) => cellName(row, column)).join(', ')
  const rest = stored.length > NAMED_CELLS ? ` and ${stored.length - NAMED_CELLS} more` : ''
  const open = formulas.filter(formula => !formula.hasValue).slice(0, UPLOAD_LIMITS.listedProblems)
  return [
    ...(first === undefined ? [] : [asks('formulas', `${stored.length === 1 ? 'One cell holds a formula' : `${stored.length} cells hold formulas`} (${names}${rest}): the value last stored is read.`, 'the sheet as it is, or its values pasted in place of the formulas', first)]),
    ...open.map(({ row, column }) => blocks('formulaWithoutValue', `Cell ${cellName(row, column)} holds a formula whose value is not stored.`, 'the workbook opened, calculated and saved once more, or a value in the cell', { row, column })),
  ]
}

/** Cells joined down a column hold one value for every row; cells joined along a row are a title over several columns. */
function fillMerged(records: readonly TableRecord[], { merged }: SheetScan): UploadProblem[] {
  const filled: string[] = []
  for (const { top, left, bottom, right } of merged) {
    const value = records[top - 1]?.cells[left - 1] ?? ''
    if (value === '' || left !== right || top === bottom) continue
    for (let row = top; row < Math.min(bottom, records.length); row++) {
      const record = records[row]
      if (record === undefined || left > record.cells.length) continue
      record.cells[left - 1] = value
      record.raw = record.cells.join('\t')
      if (record.isNumber && records[top - 1]?.isNumber?.[left - 1]) record.isNumber = record.isNumber.map((is, index) => is || index === left - 1)
    }
    filled.push(`${cellName(top, left)}:${cellName(bottom, left)}`)
  }
  if (filled.length === 0) return []
  return [asks('merged', `Joined cells ${filled.slice(0, NAMED_CELLS).join(', ')}${filled.length > NAMED_CELLS ? ` and ${filled.length - NAMED_CELLS} more` : ''} count for every row that they cover.`, 'the sheet as it is, or the value in every row')]
}

import Papa from 'papaparse'
import type { UploadProblem } from '../types'
import { UPLOAD_LIMITS } from './limits'
import { asks, blocks, note } from './problem'

export type Delimiter = ',' | ';' | '\t'

/** One line of the table. A cell in quotes may hold line ends, so that a record can be longer than a line of the file. */
export interface TableRecord {
  /** Row of the file at which it begins, from 1. */
  row: number
  cells: string[]
  /** The text as it stands in the file. */
  raw: string
  /** In a sheet: cells that hold a number and not its text; they are written with a decimal point. */
  isNumber?: readonly boolean[]
}

/** Splits text (line ends already \n) into records, keeping the row of the file for each. Stops where the table is beyond its limits, with a problem that says which. */
export function splitRecords(text: string, delimiter: Delimiter): { records: TableRecord[], problems: UploadProblem[] } {
  const records: TableRecord[] = []
  const problems: UploadProblem[] = []
  let start = 0
  let row = 1
  let cells = 0
  Papa.parse<string[]>(text, {
    delimiter, newline: '\n', quoteChar: '"', skipEmptyLines: false,
    step: ({ data, errors, meta }, parser) => {
      const raw = text.slice(start, meta.cursor).replace(/\n$/, '')
      const beyond = beyondLimits({ row, raw, width: data.length, count: records.length, cells: cells += data.length })
      if (beyond !== null) {
        problems.push(beyond)
        parser.abort()
        return
      }
      records.push({ row, cells: data.map((cell, index) => cleanCell(cell, { row, column: index + 1 }, problems)), raw })
      if (errors.some(error => error.type === 'Quotes')) note(problems, quoteProblem(row))
      for (let i = start; i < meta.cursor; i++) if (text.charCodeAt(i) === 10) row++
      start = meta.cursor
    },
  })
  return { records, problems }
}

/** The limit that a record, or the table with it, goes beyond; null where it is within all. */
export function beyondLimits({ row, raw, width, count, cells }: { row: number, raw: string, width: number, count: number, cells: number }): UploadProblem | null {
  if (count > UPLOAD_LIMITS.rows && (raw !== '' || count > 2 * UPLOAD_LIMITS.rows)) {
    return blocks('tooManyRows', `The table has more than ${UPLOAD_LIMITS.rows} rows, the limit.`, 'the table in several files', { row: UPLOAD_LIMITS.rows + 1 })
  }
  if (width > UPLOAD_LIMITS.columns) {
    return blocks('tooManyColumns', `The row has ${width} columns; the limit is ${UPLOAD_LIMITS.columns}.`, 'the table in several files, or the right mark between columns', { row, column: UPLOAD_LIMITS.columns + 1 })
  }
  if (raw.length > UPLOAD_LIMITS.lineLength) {
    return blocks('longLine', `The line has ${raw.length} characters; the limit is ${UPLOAD_LIMITS.lineLength}.`, 'a line for each row of the table, and closed quotation marks', { row })
  }
  return cells > UPLOAD_LIMITS.cells ? blocks('tooManyCells', `The table has more than ${UPLOAD_LIMITS.cells} cells up to here, the limit.`, 'the table in several files', { row }) : null
}

// Marks that turn the direction of writing or have no width: a name that holds one is not the name it looks like.
const HIDDEN = /[\u200B-\u200F\u202A-\u202E\u2060-\u2069\uFEFF]/g

/** A cell without blanks around it and without hidden marks; what was taken out or is too long is a problem at its place. */
export function cleanCell(text: string, where: { row: number, column: number }, problems: UploadProblem[]): string {
  const trimmed = text.trim()
  const plain = trimmed.replace(HIDDEN, '').trim()
  // Exports put an apostrophe before texts that a spreadsheet would take for a formula; it is not part of the name.
  const cell = plain.replace(/^'(?=[=+\-@])/, '')
  if (plain !== trimmed) note(problems, asks('hiddenMarks', 'The cell holds marks that are not seen (direction of writing, no width); it is read without them.', 'the cell typed anew, or as it is read', where))
  if (cell.length > UPLOAD_LIMITS.cellLength) note(problems, blocks('longCell', `The cell has ${cell.length} characters; the limit is ${UPLOAD_LIMITS.cellLength}.`, 'a number, a name or a few words', where))
  return cell.length > UPLOAD_LIMITS.cellLength ? cell.slice(0, UPLOAD_LIMITS.cellLength) : cell
}

export function isBlank(record: TableRecord): boolean {
  return record.cells.every(cell => cell === '')
}

export function filledCells(record: TableRecord): number {
  return record.cells.filter(cell => cell !== '').length
}

function quoteProblem(row: number): UploadProblem {
  return blocks('quotes', 'A quotation mark is opened or closed where it cannot be.',
    'quotation marks around a whole cell, and two of them ("") for one inside', { row })
}

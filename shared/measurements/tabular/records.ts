import Papa from 'papaparse'
import type { UploadProblem } from '../types'
import { blocks } from './problem'

export type Delimiter = ',' | ';' | '\t'

/** One line of the table. A cell in quotes may hold line ends, so that a record can be longer than a line of the file. */
export interface TableRecord {
  /** Row of the file at which it begins, from 1. */
  row: number
  cells: string[]
  /** The text as it stands in the file. */
  raw: string
}

/** Splits text (line ends already \n) into records, keeping the row of the file for each. */
export function splitRecords(text: string, delimiter: Delimiter): { records: TableRecord[], problems: UploadProblem[] } {
  const records: TableRecord[] = []
  const problems: UploadProblem[] = []
  let start = 0
  let row = 1
  Papa.parse<string[]>(text, {
    delimiter, newline: '\n', quoteChar: '"', skipEmptyLines: false,
    step: ({ data, errors, meta }) => {
      const raw = text.slice(start, meta.cursor).replace(/\n$/, '')
      records.push({ row, cells: data.map(cell => cell.trim()), raw })
      if (errors.some(error => error.type === 'Quotes')) problems.push(quoteProblem(row))
      for (let i = start; i < meta.cursor; i++) if (text.charCodeAt(i) === 10) row++
      start = meta.cursor
    },
  })
  return { records, problems }
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

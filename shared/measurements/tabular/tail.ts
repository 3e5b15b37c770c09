import type { UploadProblem } from '../types'
import { parseNumberCell, type DecimalMark } from './numberCell'
import { asks, quoted } from './problem'
import { filledCells, type TableRecord } from './records'
import { plainWords } from './headerText'

/** What a row of summaries beneath a table begins with. */
const SUMMARY = new Set(['mean', 'average', 'avg', 'total', 'sum', 'sd', 'std', 'stdev', 'standard deviation', 'sem', 'min', 'max', 'minimum', 'maximum', 'median', 'count', 'n', 'cv', 'mittelwert', 'summe', 'moyenne'])
const REMARK = /^(?:notes?|comments?|remarks?|end|legend|source|bemerkung|\*+|-{3,}|={3,})\b|^[*=-]{2,}/i

export interface Tail { body: TableRecord[], summaries: TableRecord[], remarks: TableRecord[] }

/** Parts the last rows that are no values from a table: sums and means of its columns, and lines of words. */
export function partTail(body: readonly TableRecord[], { width, decimal }: { width: number, decimal: DecimalMark }): Tail {
  let end = body.length
  const tail: Tail = { body: [], summaries: [], remarks: [] }
  for (; end > 1; end--) {
    const record = body[end - 1]
    if (record === undefined) break
    if (isRemark(record, width, decimal)) tail.remarks.unshift(record)
    else if (SUMMARY.has(plainWords(firstText(record)))) tail.summaries.unshift(record)
    else break
  }
  return { ...tail, body: body.slice(0, end) }
}

const firstText = (record: TableRecord): string => record.cells.find(cell => cell !== '') ?? ''

/** Words alone on their line, in a table of at least three columns, or behind a word that announces a remark. */
function isRemark(record: TableRecord, width: number, decimal: DecimalMark): boolean {
  const text = firstText(record)
  if (parseNumberCell(text, decimal).ok || SUMMARY.has(plainWords(text))) return false
  const filled = filledCells(record)
  return (REMARK.test(text) && filled <= 2) || (filled === 1 && width >= 3 && record.cells[0] === text && /[a-z]{2}.*[\s:=]/i.test(text))
}

export function tailProblems(summaries: readonly TableRecord[]): UploadProblem[] {
  return summaries.map(record => asks('summaryRow', `The row that begins with ${quoted(firstText(record))} is taken for a sum or mean of the table and is not read.`, 'the row as it is, or a name of a tube in its place', { row: record.row }))
}

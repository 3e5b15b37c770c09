import type { UploadProblem } from '../types'
import { parseNumberCell, type DecimalMark } from './numberCell'
import { asks, quoted } from './problem'
import { filledCells, type TableRecord } from './records'
import { plainWords } from './headerText'
import type { Layout } from './layout'

/** What a row of summaries beneath a table begins with; beneath a column of times shorter words say so too, which elsewhere could name a tube. */
const SUMMARY = new Set(['mean', 'average', 'avg', 'total', 'sum', 'sd', 'std', 'stdev', 'standard deviation', 'sem', 'median', 'mittelwert', 'summe', 'moyenne'])
const SHORT = new Set(['n', 'cv', 'min', 'max', 'minimum', 'maximum', 'count'])
const REMARK = /^(?:notes?|comments?|remarks?|end|legend|source|bemerkung|\*+|-{3,}|={3,})\b|^[*=-]{2,}/i

export interface Tail { body: TableRecord[], summaries: TableRecord[], remarks: TableRecord[] }

/** Parts the last rows that are no values from a table: sums and means of its columns, and lines of words. */
export function partTail(body: readonly TableRecord[], { width, decimal, layout }: { width: number, decimal: DecimalMark, layout: Layout }): Tail {
  let end = body.length
  const names = countNames(body)
  const isSummary = (text: string) => layout === 'columnPerTube' ? SUMMARY.has(text) || SHORT.has(text) : SUMMARY.has(text) && names.get(text) === 1
  const tail: Tail = { body: [], summaries: [], remarks: [] }
  for (; end > 1; end--) {
    const record = body[end - 1]
    if (record === undefined) break
    if (isRemark(record, width, decimal)) tail.remarks.unshift(record)
    else if (isSummary(plainWords(firstText(record)))) tail.summaries.unshift(record)
    else break
  }
  return { ...tail, body: body.slice(0, end) }
}

/** How many rows begin with each text: a tube that is called 'mean' has several rows. */
function countNames(body: readonly TableRecord[]): Map<string, number> {
  const names = new Map<string, number>()
  for (const record of body) {
    const name = plainWords(firstText(record))
    names.set(name, (names.get(name) ?? 0) + 1)
  }
  return names
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

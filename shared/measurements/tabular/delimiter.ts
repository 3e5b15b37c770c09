import { isNumberInEither } from './numberCell'
import { filledCells, isBlank, splitRecords, type Delimiter, type TableRecord } from './records'

/** In the order in which a tie is settled: a tab or a semicolon is hardly ever part of a cell, a comma may be a decimal mark. */
export const DELIMITERS: readonly Delimiter[] = ['\t', ';', ',']

export const DELIMITER_WORDS: Readonly<Record<Delimiter, string>> = { ',': 'comma', ';': 'semicolon', '\t': 'tab' }

const LINES_LOOKED_AT = 400

/** The mark between columns: the one under which most lines agree in width and most cells are numbers; null where no mark gives two columns. */
export function sniffDelimiter(text: string): Delimiter | null {
  const head = text.split('\n', LINES_LOOKED_AT).join('\n')
  let best: { delimiter: Delimiter, score: number } | null = null
  for (const delimiter of DELIMITERS) {
    const score = scoreOf(splitRecords(head, delimiter).records.filter(record => !isBlank(record)))
    if (score > 0 && (best === null || score > best.score * 1.0001)) best = { delimiter, score }
  }
  return best?.delimiter ?? null
}

function scoreOf(records: readonly TableRecord[]): number {
  const byWidth = new Map<number, TableRecord[]>()
  for (const record of records) {
    const width = record.cells.length
    if (width >= 2) byWidth.set(width, [...byWidth.get(width) ?? [], record])
  }
  let best = 0
  for (const [width, group] of byWidth) {
    const cells = group.reduce((sum, record) => sum + filledCells(record), 0)
    const numbers = group.reduce((sum, record) => sum + record.cells.filter(isNumberInEither).length, 0)
    const fractured = group.reduce((sum, record) => sum + record.cells.filter(isFractured).length, 0)
    const share = cells === 0 ? 0 : (numbers - fractured) / cells
    best = Math.max(best, group.length * (0.1 + Math.max(0, share)) * (1 + Math.min(width, 4) / 100))
  }
  return best
}

/** A cell that still holds a stronger mark was cut at the wrong one. */
function isFractured(cell: string): boolean {
  return /[;\t]/.test(cell)
}

import type { MeasurementKind, UploadProblem } from '../types'
import { findConditions, findSheetCode, readMetadata, type FoundCondition } from './metadata'
import { cellName } from './place'
import type { SheetTable } from '../workbook/sheetTable'

const MOST_ROWS = 200
const MOST_COLUMNS = 4

/** Conditions on sheets of keys and values: few columns, and at least one key that names a condition of the kind. */
export function sheetConditions(sheets: readonly SheetTable[], kind: MeasurementKind): { found: FoundCondition[], problems: UploadProblem[], code: string | null } {
  const found: FoundCondition[] = []
  const problems: UploadProblem[] = []
  let code: string | null = null
  for (const { name, records } of sheets) {
    const filled = records.filter(record => record.cells.some(cell => cell !== ''))
    if (filled.length === 0 || filled.length > MOST_ROWS || filled.some(record => record.cells.filter(cell => cell !== '').length > MOST_COLUMNS)) continue
    const lines = readMetadata(filled, '\t')
    const here = findConditions(lines, kind.conditions)
    code ??= findSheetCode(lines)
    found.push(...here.found.map(one => ({ ...one, place: `sheet ${name}, ${one.place}` })))
    problems.push(...here.problems.map(problem => ({ ...problem, sheet: name, row: null, column: null, message: `Sheet ${name}, cell ${cellName(problem.row ?? 1, problem.column ?? 1)}: ${problem.message}` })))
  }
  return { found, problems, code }
}

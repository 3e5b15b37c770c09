import type { UploadDraft } from '../draft'
import type { MeasurementKind, UploadProblem } from '../types'
import { sniffDelimiter } from './delimiter'
import { findHeader } from './layout'
import type { FoundCondition } from './metadata'
import { asks, blocks, quoted } from './problem'
import type { Encoding } from './readText'
import { splitRecords, type Delimiter, type TableRecord } from './records'
import { sheetConditions } from './sheetConditions'
import type { SheetTable } from '../workbook/sheetTable'

/** Where a table was read from, as a person is told. */
export interface SourceFacts { encoding: Encoding | null, workbook: { sheet: string, sheets: string[] } | null }

/** A table before anything is made of it: its records, whatever kind of file they stood in. */
export interface SourceTable {
  records: TableRecord[]
  problems: UploadProblem[]
  /** Mark between the columns of a text; null where none gives a table. In a sheet, records are joined by tabs. */
  delimiter: Delimiter | null
  isSheet: boolean
  facts: SourceFacts
  /** Conditions that stand on another sheet. */
  found: FoundCondition[]
  /** Code of a tube sheet that stands on another sheet. */
  tubeSheet: string | null
}

export function textTable(text: string, { draft, encoding = null }: { draft: UploadDraft, encoding?: Encoding | null }): SourceTable {
  const delimiter = draft.delimiter ?? sniffDelimiter(text)
  return { ...splitRecords(text, delimiter ?? ','), delimiter, isSheet: false, facts: { encoding, workbook: null }, found: [], tubeSheet: null }
}

export interface Workbook { sheets: readonly SheetTable[], hasLinks: boolean, hasMacros: boolean }

/** The table of one sheet: the one chosen, else the visible one that has most numbers under a head of this kind. Other sheets may hold conditions. */
export function sheetSource(workbook: Workbook, kind: MeasurementKind, draft: UploadDraft): SourceTable {
  const ranked = ranking(workbook.sheets, kind)
  const best = ranked[0]?.sheet ?? workbook.sheets[0]
  const named = draft.sheet === undefined ? undefined : workbook.sheets.find(sheet => sheet.name === draft.sheet)
  const chosen = named ?? best
  const facts: SourceFacts = { encoding: null, workbook: chosen === undefined ? null : { sheet: chosen.name, sheets: workbook.sheets.map(sheet => sheet.name) } }
  if (chosen === undefined) return { records: [], problems: [blocks('noSheet', 'The workbook has no sheet of cells.', 'a workbook with the table on a sheet')], delimiter: null, isSheet: true, facts, found: [], tubeSheet: null }
  const others = sheetConditions(workbook.sheets.filter(sheet => sheet !== chosen && !sheet.isHidden), kind)
  const hasTable = chosen.records.some(record => record.cells.filter(cell => cell !== '').length >= 2)
  const inSheet = chosen.problems.map(problem => ({ ...problem, sheet: chosen.name }))
  const doubts = draft.sheet === undefined ? sheetDoubts(ranked, chosen.name) : named === undefined ? [missing(draft.sheet, workbook)] : []
  const problems = [...inSheet, ...others.problems, ...doubts, ...workbookProblems(workbook)]
  return { records: chosen.records, problems, delimiter: hasTable ? '\t' : null, isSheet: true, facts, found: others.found, tubeSheet: others.code }
}

interface Ranked { sheet: SheetTable, hasHead: boolean, numbers: number }

function ranking(sheets: readonly SheetTable[], kind: MeasurementKind): Ranked[] {
  return sheets.filter(sheet => !sheet.isHidden).map((sheet) => {
    const filled = sheet.records.filter(record => record.cells.some(cell => cell !== ''))
    const numbers = filled.slice(0, 500).reduce((sum, record) => sum + record.cells.filter((_, i) => record.isNumber?.[i]).length, 0)
    return { sheet, hasHead: findHeader(filled, kind, 'point') !== null, numbers }
  }).sort((a, b) => Number(b.hasHead && b.numbers > 0) - Number(a.hasHead && a.numbers > 0) || b.numbers - a.numbers)
}

function sheetDoubts(ranked: readonly Ranked[], chosen: string): UploadProblem[] {
  const tables = ranked.filter(one => one.hasHead && one.numbers >= 6)
  if (tables.length < 2) return []
  return [asks('severalSheets', `Sheets ${tables.map(one => quoted(one.sheet.name)).join(', ')} hold tables; ${quoted(chosen)} is read.`, 'the sheet chosen; one upload reads one sheet', { field: 'sheet' })]
}

const missing = (name: string, { sheets }: Workbook): UploadProblem =>
  blocks('noSheet', `The workbook has no sheet called ${quoted(name)}.`, `one of: ${sheets.map(sheet => quoted(sheet.name)).join(', ')}`, { field: 'sheet' })

function workbookProblems({ hasLinks, hasMacros }: Workbook): UploadProblem[] {
  return [
    ...(hasLinks ? [asks('externalLinks', 'The workbook takes values from other files; those last stored in it are read, and no other file is opened.', 'the workbook as it is, or its values pasted in')] : []),
    ...(hasMacros ? [asks('macros', 'The workbook holds macros; they are neither run nor read.', 'the workbook as it is, or saved without macros')] : []),
  ]
}

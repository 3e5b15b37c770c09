import type { Unit } from '../../science/units'
import { checkConditions, mergeConditions } from '../conditionsOf'
import type { UploadDraft } from '../draft'
import { splitSeries } from '../splitSeries'
import type { ColumnSpec, MeasurementKind, UploadProblem } from '../types'
import { columnProblems, readColumns, unitlessUnit, type How, type ReadColumn } from './columns'
import { sniffDecimal } from './decimal'
import { describeColumns, looseUnits } from './describe'
import { finishTubes } from './finishTubes'
import { withoutGroups } from './grouped'
import { findUnit } from './headerText'
import { impliedConditions } from './implied'
import { matchHeaders, specsOf } from './layout'
import { UPLOAD_LIMITS } from './limits'
import { longTubes } from './longTubes'
import { findConditions, findNamed, findSheetCode, readMetadata, type FoundCondition } from './metadata'
import type { DecimalMark } from './numberCell'
import { listProblems, note } from './problem'
import type { RawTube } from './rawTube'
import type { Encoding } from './readText'
import type { Delimiter, TableRecord } from './records'
import { seriesProblems } from './seriesProblems'
import { textTable, type SourceTable } from './source'
import { findStructure, type TableStructure } from './structure'
import { contradictions, decimalDoubt, looseProblem, noTable, structureProblems } from './tableProblems'
import { sheetFound, sheetProblems, type SheetFacts } from './tubeSheet'
import type { Understood } from './understood'
import { columnTubes, cornerUnit, rowTubes } from './wideTubes'

export interface UnderstandInput {
  kind: MeasurementKind
  draft?: UploadDraft
  /** Tube sheet that the person or the file names. */
  sheet?: SheetFacts | null
}

/** Reads a table that stands in a text. @param text decoded, line ends \n: what readText gives */
export function understandTable({ text, draft = {}, encoding = null, ...rest }: UnderstandInput & { text: string, encoding?: Encoding | null }): Understood {
  return understandSource(textTable(text, { draft, encoding }), { ...rest, draft })
}

/**
 * Reads a table for a measurement kind: how it is laid out, what every column and line means, its tubes with their points in stored units, the
 * series they make, and every problem with its place. A choice in the draft always wins over what is found or guessed.
 * Pure: the same table and draft give the same answer, so that storing reads the bytes anew and gets what the preview showed.
 */
export function understandSource(source: SourceTable, { kind, draft = {}, sheet = null }: UnderstandInput): Understood {
  const problems: UploadProblem[] = [...source.problems]
  const hasTable = source.delimiter !== null
  const delimiter: Delimiter = source.delimiter ?? ','
  const plain = withoutGroups(source.records)
  const guess = sniffDecimal(plain)
  const decimal = draft.decimal ?? guess.decimal
  if (draft.decimal === undefined && guess.example) problems.push(decimalDoubt(guess.example))
  if (!hasTable) problems.push(noTable(source.isSheet))
  if (problems.some(problem => TOO_LARGE.has(problem.id))) return emptyOutcome(source, { decimal, problems })
  const records = decimal === 'comma' ? plain.map(withCommas) : plain
  const structure = findStructure({ records, kind, decimal, draft })
  const columns = readColumns({ ...structure, kind, draft })
  const metadata = readMetadata(structure.around, delimiter)
  const inLines = findConditions(metadata, kind.conditions)
  const everyFound = [...inLines.found, ...impliedConditions(structure, columns), ...source.found, ...sheetFound(sheet)]
  const found = firstOfEach(everyFound)
  const conditions = mergeConditions(kind, found, draft.conditions)
  note(problems, ...inLines.problems, ...contradictions(everyFound, kind, draft), ...(hasTable ? [...structureProblems(structure), ...columnProblems(columns, { ...structure, kind, draft })] : []))
  const loose = looseUnits({ structure, columns, kind, draft, decimal })
  note(problems, ...loose.filter(unit => unit.unit === null).map(unit => looseProblem(unit, kind)))
  const named = { agent: findNamed(metadata, 'agent', kind.columns), batch: findNamed(metadata, 'batch', kind.columns) }
  const raw = !hasTable || (structure.body.length === 0 && !structure.isTransposed) ? [] : rawTubes({ structure, columns, kind, draft, decimal })
  const tubes = finishTubes(raw, { kind, conditions, draft, decimal, named, problems, sheet })
  const series = splitSeries({ tubes })
  note(problems, ...checkConditions(kind, conditions), ...seriesProblems({ kind, series, tubes, conditions, raw }), ...sheetProblems(sheet, tubes, new Map(raw.map(tube => [tube.key, tube.label]))))
  const listed = listProblems(problems).map(problem => placedIn(problem, source))
  return {
    ...frame(source, { decimal, problems: listed }), metadata, tubeSheet: findSheetCode(metadata) ?? source.tubeSheet, headerRow: structure.header?.row ?? null, layout: structure.layout, how: howOf(draft),
    columns: describeColumns({ columns, structure, kind, decimal }), looseUnits: loose, found, conditions, tubes, series,
    problems: listed, canStore: series.length > 0 && listed.every(problem => problem.severity !== 'blocks'),
  }
}

const TOO_LARGE: ReadonlySet<string> = new Set(['tooManyRows', 'tooManyColumns', 'tooManyCells', 'longLine'])

/** Numbers of a sheet are written with a decimal point; where its texts use the comma they are turned, so that one mark counts. */
function withCommas(record: TableRecord): TableRecord {
  return record.isNumber === undefined ? record : { ...record, cells: record.cells.map((cell, index) => record.isNumber?.[index] ? cell.replace('.', ',') : cell) }
}

function firstOfEach(found: readonly FoundCondition[]): FoundCondition[] {
  return found.filter((one, index) => found.findIndex(other => other.key === one.key) === index)
}

/** Row and column of a problem belong to the sheet that was read. */
function placedIn(problem: UploadProblem, { facts }: SourceTable): UploadProblem {
  return facts.workbook === null || problem.sheet !== undefined || (problem.row === null && problem.column === null) ? problem : { ...problem, sheet: facts.workbook.sheet }
}

function howOf(draft: UploadDraft): Understood['how'] {
  const how = (choice: unknown): How => choice === undefined ? 'guessed' : 'chosen'
  return { delimiter: how(draft.delimiter), decimal: how(draft.decimal), headerRow: how(draft.headerRow), layout: how(draft.layout) }
}

/** First rows of the file, and those of its problems wherever they stand, so that each can be looked at. */
function frame({ records, delimiter, isSheet, facts }: SourceTable, { decimal, problems }: { decimal: DecimalMark, problems: readonly UploadProblem[] }) {
  const faulty = new Set(problems.map(problem => problem.row))
  const filled = records.filter((record, i) => i < records.length - 1 || record.cells.some(cell => cell !== ''))
  return {
    ...facts, preview: filled.filter((record, i) => i < UPLOAD_LIMITS.previewRows || faulty.has(record.row)).map(record => ({ row: record.row, cells: record.cells.slice(0, UPLOAD_LIMITS.columns) })),
    rowCount: filled.length, columnCount: filled.reduce((width, record) => Math.max(width, record.cells.length), 0), delimiter: isSheet ? null : delimiter, decimal,
  }
}

function emptyOutcome(source: SourceTable, { decimal, problems }: { decimal: DecimalMark, problems: UploadProblem[] }): Understood {
  return {
    ...frame(source, { decimal, problems }), metadata: [], tubeSheet: null, headerRow: null, layout: 'long', how: howOf({}), columns: [], looseUnits: [], found: [], conditions: {}, tubes: [], series: [],
    problems: listProblems(problems).map(problem => placedIn(problem, source)), canStore: false,
  }
}

interface RawInput { structure: TableStructure, columns: readonly ReadColumn[], kind: MeasurementKind, draft: UploadDraft, decimal: DecimalMark }

function rawTubes({ structure, columns, kind, draft, decimal }: RawInput): RawTube[] {
  const { header, body, attributes, layout } = structure
  if (layout === 'long') return longTubes(body, columns, specsOf(kind, 'x').length === 0)
  if (layout === 'columnPerTube') return columnTubes({ kind, columns, header, attributes, body })
  const matches = header === null ? [] : matchHeaders(header.cells, kind.columns)
  return rowTubes({ kind, columns, header, body, decimal, xUnit: chosenUnit(specsOf(kind, 'x')[0], draft) ?? cornerUnit(matches) })
}

function chosenUnit(spec: ColumnSpec | undefined, draft: UploadDraft): Unit | null {
  const text = spec === undefined ? null : draft.units?.[spec.stem] ?? null
  return spec === undefined || spec.dimension === 'text' ? null : text === null ? unitlessUnit(spec) : findUnit(text, spec.dimension)
}

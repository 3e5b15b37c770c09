import type { Unit } from '../../science/units'
import { checkConditions, mergeConditions } from '../conditionsOf'
import type { UploadDraft } from '../draft'
import { splitSeries } from '../splitSeries'
import type { ColumnSpec, MeasurementKind, UploadProblem } from '../types'
import { acceptedUnits, columnProblems, readColumns, unitlessUnit, type How, type ReadColumn } from './columns'
import { sniffDecimal, type DecimalGuess } from './decimal'
import { sniffDelimiter } from './delimiter'
import { describeColumns, looseUnits } from './describe'
import { finishTubes } from './finishTubes'
import { findUnit } from './headerText'
import { impliedConditions } from './implied'
import { matchHeaders, specsOf } from './layout'
import { UPLOAD_LIMITS } from './limits'
import { longTubes } from './longTubes'
import { findConditions, findNamed, readMetadata, type MetadataLine } from './metadata'
import type { WorkbookTable } from '../workbook/toTable'
import type { DecimalMark } from './numberCell'
import { asks, blocks, listProblems, quoted } from './problem'
import type { RawTube } from './rawTube'
import { splitRecords, type Delimiter, type TableRecord } from './records'
import { findStructure, widthProblems, type TableStructure } from './structure'
import { seriesProblems } from './seriesProblems'
import type { Understood } from './understood'
import { columnTubes, cornerUnit, rowTubes } from './wideTubes'

export interface UnderstandInput {
  /** Decoded, line ends \n: what readText gives; or the sheet of a workbook. */
  text: string | WorkbookTable
  kind: MeasurementKind
  draft?: UploadDraft
}

/**
 * Reads a table for a measurement kind: how it is laid out, what every column and line means, its tubes with their points in stored units, the
 * series they make, and every problem with its place. A choice in the draft always wins over what is found or guessed.
 * Pure: the same text and draft give the same answer, so that storing reads the bytes anew and gets what the preview showed.
 */
export function understandTable({ text, kind, draft = {} }: UnderstandInput): Understood {
  const { records, problems, sniffed, guess, lines } = typeof text === 'string' ? fromText(text, draft) : fromWorkbook(text)
  const delimiter: Delimiter = sniffed ?? ','
  const tooLarge = sizeProblems(records)
  const decimal = draft.decimal ?? guess.decimal
  if (draft.decimal === undefined && guess.example) problems.push(decimalDoubt(guess.example))
  if (sniffed === null) problems.push(noTable())
  if (tooLarge.length > 0) return emptyOutcome({ records, delimiter: sniffed, decimal, problems: [...problems, ...tooLarge] })
  const structure = findStructure({ records, kind, decimal, draft })
  const columns = readColumns({ ...structure, kind, draft })
  const metadata = [...readMetadata(structure.around, delimiter), ...lines]
  const inLines = findConditions(metadata, kind.conditions)
  const found = [...inLines.found, ...impliedConditions(structure, columns)]
  const conditions = mergeConditions(kind, found, draft.conditions)
  problems.push(...inLines.problems, ...structureProblems(structure, sniffed !== null), ...(sniffed === null ? [] : columnProblems(columns, { ...structure, kind, draft })))
  const loose = looseUnits({ structure, columns, kind, draft, decimal })
  problems.push(...loose.filter(unit => unit.unit === null).map(unit => looseProblem(unit, kind)))
  const named = { agent: findNamed(metadata, 'agent', kind.columns), batch: findNamed(metadata, 'batch', kind.columns) }
  const raw = sniffed === null || (structure.body.length === 0 && !structure.isTransposed) ? [] : rawTubes({ structure, columns, kind, draft, decimal })
  const tubes = finishTubes(raw, { kind, draft, decimal, named, problems })
  const series = splitSeries({ tubes })
  problems.push(...checkConditions(kind, conditions), ...seriesProblems({ kind, series, tubes, conditions, raw }))
  const listed = listProblems(problems)
  return {
    ...frame({ records, delimiter: sniffed, decimal }), workbook: typeof text === 'string' ? null : { sheet: text.sheet, sheets: text.sheets }, encoding: null, metadata, headerRow: structure.header?.row ?? null, layout: structure.layout, how: howOf(draft),
    columns: describeColumns({ columns, structure, kind, decimal }), looseUnits: loose, found, conditions, tubes, series,
    problems: listed, canStore: series.length > 0 && listed.every(problem => problem.severity !== 'blocks'),
  }
}

interface Parted { records: TableRecord[], problems: UploadProblem[], sniffed: Delimiter | null, guess: Pick<DecimalGuess, 'decimal' | 'example'>, lines: MetadataLine[] }

function fromText(text: string, draft: UploadDraft): Parted {
  const sniffed = draft.delimiter ?? sniffDelimiter(text)
  const { records, problems } = splitRecords(text, sniffed ?? ',')
  return { records, problems, sniffed, guess: sniffDecimal(records), lines: [] }
}

const fromWorkbook = ({ records, problems, decimal, lines }: WorkbookTable): Parted => ({ records, problems: [...problems], sniffed: '\t', guess: { decimal, example: null }, lines })

function howOf(draft: UploadDraft): Understood['how'] {
  const how = (choice: unknown): How => choice === undefined ? 'guessed' : 'chosen'
  return { delimiter: how(draft.delimiter), decimal: how(draft.decimal), headerRow: how(draft.headerRow), layout: how(draft.layout) }
}

interface Frame { records: readonly TableRecord[], delimiter: Delimiter | null, decimal: DecimalMark }

function frame({ records, delimiter, decimal }: Frame) {
  const filled = records.filter((record, i) => i < records.length - 1 || record.cells.some(cell => cell !== ''))
  return {
    preview: filled.slice(0, UPLOAD_LIMITS.previewRows).map(record => ({ row: record.row, cells: record.cells.slice(0, UPLOAD_LIMITS.columns) })),
    rowCount: filled.length, columnCount: filled.reduce((width, record) => Math.max(width, record.cells.length), 0), delimiter, decimal,
  }
}

function emptyOutcome({ problems, ...rest }: Frame & { problems: UploadProblem[] }): Understood {
  return {
    ...frame(rest), workbook: null, encoding: null, metadata: [], headerRow: null, layout: 'long', how: howOf({}), columns: [], looseUnits: [], found: [], conditions: {}, tubes: [], series: [],
    problems: listProblems(problems), canStore: false,
  }
}

function sizeProblems(records: readonly TableRecord[]): UploadProblem[] {
  const width = records.reduce((most, record) => Math.max(most, record.cells.length), 0)
  const problems: UploadProblem[] = []
  if (records.length > UPLOAD_LIMITS.rows + 1) problems.push(blocks('tooManyRows', `The table has ${records.length} rows; the limit is ${UPLOAD_LIMITS.rows}.`, 'the table in several files', { row: UPLOAD_LIMITS.rows + 1 }))
  if (width > UPLOAD_LIMITS.columns) problems.push(blocks('tooManyColumns', `The table has ${width} columns; the limit is ${UPLOAD_LIMITS.columns}.`, 'the table in several files, or the right mark between columns', { column: UPLOAD_LIMITS.columns + 1 }))
  return problems
}

function decimalDoubt({ text, row, column }: { text: string, row: number, column: number }): UploadProblem {
  return asks('decimalDoubt', `${quoted(text)} can be a number with a decimal comma or one with thousands: the comma is taken for the decimal mark.`, 'the decimal mark chosen, and thousands parted by spaces', { row, column })
}

function noTable(): UploadProblem {
  return blocks('noTable', 'No table found: no line has two columns.', 'commas, semicolons or tabs between columns, the same number in every row')
}

function structureProblems(structure: TableStructure, hasTable: boolean): UploadProblem[] {
  if (!hasTable) return []
  const { header, body, isTransposed } = structure
  const problems = widthProblems(structure)
  if (header === null && !isTransposed) problems.push(asks('noHeader', 'No row was recognised as the head of the table.', 'the row of heads chosen, or the columns chosen one by one'))
  if (body.length === 0 && !isTransposed) problems.push(blocks('noValues', 'The table has a head and no rows of values.', 'at least one row of numbers beneath the head', { row: header?.row ?? null }))
  return problems
}

function looseProblem({ stem, label, place }: Understood['looseUnits'][number], kind: MeasurementKind): UploadProblem {
  const spec = kind.columns.find(candidate => candidate.stem === stem)
  const row = /\d+/.exec(place)?.[0]
  return blocks('unit', `${label} (${place}): no unit that is known for it.`, spec ? acceptedUnits(spec) : 'a unit', { row: row === undefined ? null : Number(row), field: `units.${stem}` })
}

interface RawInput { structure: TableStructure, columns: readonly ReadColumn[], kind: MeasurementKind, draft: UploadDraft, decimal: DecimalMark }

function rawTubes({ structure, columns, kind, draft, decimal }: RawInput): RawTube[] {
  const { header, body, attributes, layout } = structure
  if (layout === 'long') return longTubes(body, columns, specsOf(kind, 'x').length === 0)
  if (layout === 'columnPerTube') return columnTubes({ columns, header, attributes, body })
  const matches = header === null ? [] : matchHeaders(header.cells, kind.columns)
  return rowTubes({ kind, columns, header, body, decimal, xUnit: chosenUnit(specsOf(kind, 'x')[0], draft) ?? cornerUnit(matches) })
}

function chosenUnit(spec: ColumnSpec | undefined, draft: UploadDraft): Unit | null {
  const text = spec === undefined ? null : draft.units?.[spec.stem] ?? null
  return spec === undefined || spec.dimension === 'text' ? null : text === null ? unitlessUnit(spec) : findUnit(text, spec.dimension)
}

import type { Unit } from '../../science/units'
import type { ColumnSpec, MeasurementKind } from '../types'
import type { ValueCell } from './cells'
import { unitlessUnit, type ReadColumn } from './columns'
import { plainWords, type HeaderMatch } from './headerText'
import { readHeadNumber, specsOf } from './layout'
import { UPLOAD_LIMITS } from './limits'
import type { DecimalMark } from './numberCell'
import { columnLetter, rowsText } from './place'
import type { NamedCell, RawPoint, RawTube } from './rawTube'
import type { TableRecord } from './records'

/** A row of a wide table that says something of every tube: agents, batches, concentrations, in transposed tables the results too. */
export interface AttributeRow { record: TableRecord, spec: ColumnSpec, unit: Unit | null }

interface ColumnInput {
  columns: readonly ReadColumn[]
  header: TableRecord | null
  attributes: readonly AttributeRow[]
  body: readonly TableRecord[]
}

/** Tubes of a table with a column per tube: heads are names, times run down. An error column is headed like its tube with SD or SE added. */
export function columnTubes({ kind, columns, header, attributes, body }: ColumnInput & { kind: MeasurementKind }): RawTube[] {
  const xColumn = columns.find(column => column.spec?.role === 'x') ?? null
  const named = columns.filter(column => column.isTube)
  const beside = besideTubes(named, kind)
  const tubes = named.filter(column => !beside.has(column))
  const errors = new Map(tubes.flatMap((column) => {
    const owner = tubes.find(candidate => candidate !== column && errorOwner(column.header) === candidate.header.trim().toLowerCase())
    return owner ? [[column, owner] as const] : []
  }))
  return tubes.filter(column => !errors.has(column)).map((column) => {
    const error = [...errors].find(([, owner]) => owner === column)?.[0] ?? null
    const aux = [...beside].flatMap(([each, { owner, spec }]) => owner === column ? [{ ...each, spec, unit: unitlessUnit(spec) }] : [])
    return columnTube({ column, error, aux, xColumn, header, attributes, body })
  })
}

/** Columns that hold another number of each point of a tube: headed like the tube with the number's name before or behind it ('A pixels'). */
function besideTubes(tubes: readonly ReadColumn[], kind: MeasurementKind): Map<ReadColumn, { owner: ReadColumn, spec: ColumnSpec }> {
  const beside = new Map<ReadColumn, { owner: ReadColumn, spec: ColumnSpec }>()
  const byName = new Map(tubes.map(column => [plainWords(column.header), column]))
  // Only numbers without a unit of their own can be read without asking for one.
  for (const spec of specsOf(kind, 'aux').filter(one => unitlessUnit(one) !== null)) {
    for (const column of tubes) {
      const words = plainWords(column.header)
      const rest = [...spec.synonyms].sort((a, b) => b.length - a.length).flatMap(name => words.endsWith(` ${name}`) ? [words.slice(0, -name.length - 1)] : words.startsWith(`${name} `) ? [words.slice(name.length + 1)] : [])
      const owner = rest.map(name => byName.get(name)).find(candidate => candidate !== undefined && candidate !== column)
      if (owner && !beside.has(column)) beside.set(column, { owner, spec })
    }
  }
  return beside
}

function errorOwner(header: string): string | null {
  if (header.length > UPLOAD_LIMITS.wordsLength) return null
  const match = /^(?:(?:sd|se|sem|std|error|±)[\s_:]+(.+)|(.+?)[\s_,(]+(?:sd|se|sem|std|error|±)\)?)$/i.exec(header.trim())
  return (match?.[1] ?? match?.[2])?.trim().toLowerCase() ?? null
}

interface OneColumn extends Omit<ColumnInput, 'columns'> { column: ReadColumn, error: ReadColumn | null, aux: readonly ReadColumn[], xColumn: ReadColumn | null }

function columnTube({ column, error, aux, xColumn, header, attributes, body }: OneColumn): RawTube {
  const named = (role: ColumnSpec['role']): NamedCell | null => {
    const attribute = attributes.find(candidate => candidate.spec.role === role)
    const text = attribute?.record.cells[column.index] ?? ''
    return attribute === undefined || text === '' ? null : { text, row: attribute.record.row, column: column.index + 1 }
  }
  const value = (attribute: AttributeRow): ValueCell => ({
    text: attribute.record.cells[column.index] ?? '', row: attribute.record.row, column: column.index + 1, spec: attribute.spec, unit: attribute.unit,
  })
  const valueOf = (role: ColumnSpec['role']) => attributes.filter(candidate => candidate.spec.role === role).map(value).find(cell => cell.text !== '') ?? null
  const ySpec = column.spec
  const ofTube = attributes.filter(candidate => candidate.spec.role === 'aux').map(value)
  const points = xColumn === null || ySpec === null
    ? resultPoints(attributes, value).map(point => ({ ...point, aux: ofTube }))
    : body.flatMap(record => bodyPoint(record, { column, error, aux, xColumn, ySpec })).map(point => ({ ...point, aux: [...point.aux, ...ofTube] }))
  return {
    key: `column ${column.index}`, label: named('tube')?.text ?? column.header, agent: named('agent'), batch: named('batch'), conc: valueOf('conc'), concSe: valueOf('concError'),
    points, conflicts: [], place: `column ${columnLetter(column.index)}, ${rowsText(points.map(point => point.y.row))}`, row: header?.row ?? body[0]?.row ?? 1, column: column.index + 1,
  }
}

interface BodyColumns { column: ReadColumn, error: ReadColumn | null, aux: readonly ReadColumn[], xColumn: ReadColumn, ySpec: ColumnSpec }

/** An empty cell is a time at which this tube was not measured. */
function bodyPoint(record: TableRecord, { column, error, aux, xColumn, ySpec }: BodyColumns): RawPoint[] {
  if ((record.cells[column.index] ?? '') === '') return []
  const cell = (at: ReadColumn, spec: ColumnSpec | null): ValueCell | null =>
    spec === null ? null : { text: record.cells[at.index] ?? '', row: record.row, column: at.index + 1, spec, unit: at.unit }
  const y = cell(column, ySpec)
  return y === null ? [] : [{ x: cell(xColumn, xColumn.spec), y, sigma: error === null ? null : cell(error, { ...ySpec, label: `${ySpec.label}, error`, above: 0 }), aux: aux.flatMap(each => cell(each, each.spec) ?? []) }]
}

function resultPoints(attributes: readonly AttributeRow[], value: (attribute: AttributeRow) => ValueCell): RawPoint[] {
  const sigma = attributes.find(candidate => candidate.spec.role === 'sigma')
  return attributes.filter(candidate => candidate.spec.role === 'y' && value(candidate).text !== '')
    .map(attribute => ({ x: null, y: value(attribute), sigma: sigma === undefined ? null : value(sigma), aux: [] }))
}

interface RowInput {
  kind: MeasurementKind
  columns: readonly ReadColumn[]
  header: TableRecord | null
  body: readonly TableRecord[]
  decimal: DecimalMark
  /** Unit of the times across the head where they carry none themselves. */
  xUnit: Unit | null
}

/** Columns of a row-per-tube table whose heads are times. */
export function timeColumns({ kind, columns, header, decimal }: Omit<RowInput, 'body' | 'xUnit'>): { column: ReadColumn, text: string, unit: Unit | null }[] {
  const xSpec = specsOf(kind, 'x')[0]
  if (xSpec === undefined || header === null) return []
  return columns.flatMap((column) => {
    const isFree = column.spec === null && column.how !== 'chosen' || column.isTube
    const head = isFree ? readHeadNumber(column.header, xSpec, decimal) : null
    return head === null ? [] : [{ column, text: head.text, unit: head.unit }]
  })
}

/** Tubes of a table with a row per tube: times run across the head. */
export function rowTubes(input: RowInput): RawTube[] {
  const xSpec = specsOf(input.kind, 'x')[0]
  const ySpec = specsOf(input.kind, 'y')[0]
  if (xSpec === undefined || ySpec === undefined) return []
  const times = timeColumns(input)
  const at = (role: ColumnSpec['role']) => input.columns.find(column => column.spec?.role === role) ?? null
  const aux = input.columns.filter(column => column.spec?.role === 'aux')
  const corner = input.columns.find(column => column.index === 0 && column.spec === null && !times.some(time => time.column === column)) ?? null
  return input.body.map((record) => {
    const named = (column: ReadColumn | null): NamedCell | null => {
      const text = column === null ? '' : record.cells[column.index] ?? ''
      return column === null || text === '' ? null : { text, row: record.row, column: column.index + 1 }
    }
    const value = (column: ReadColumn | null): ValueCell | null => {
      const name = named(column)
      return name === null || column?.spec == null ? null : { ...name, spec: column.spec, unit: column.unit }
    }
    const points = times.flatMap(({ column, text, unit }) => {
      const cell = { text: record.cells[column.index] ?? '', row: record.row, column: column.index + 1, spec: ySpec, unit: column.unit ?? unitlessUnit(ySpec) }
      const x = { text, row: input.header?.row ?? 1, column: column.index + 1, spec: xSpec, unit: unit ?? input.xUnit }
      return cell.text === '' ? [] : [{ x, y: cell, sigma: null, aux: aux.flatMap(each => value(each) ?? []) }]
    })
    return {
      key: `row ${record.row}`, label: named(at('tube') ?? corner)?.text ?? '', agent: named(at('agent')), batch: named(at('batch')), conc: value(at('conc')), concSe: value(at('concError')),
      points, conflicts: [], place: `row ${record.row}`, row: record.row, column: ((at('tube') ?? corner)?.index ?? 0) + 1,
    }
  })
}

/** Unit named in the corner of a row-per-tube table ('TI (ms)' above the tubes' names). */
export function cornerUnit(matches: readonly (HeaderMatch | null)[]): Unit | null {
  return matches.find(match => match?.spec.role === 'x')?.unit ?? null
}

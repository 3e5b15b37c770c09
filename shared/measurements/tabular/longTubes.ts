import type { ColumnSpec } from '../types'
import type { ValueCell } from './cells'
import type { ReadColumn } from './columns'
import { rowsText } from './place'
import type { NamedCell, RawTube } from './rawTube'
import type { TableRecord } from './records'

type Role = ColumnSpec['role']

interface Line { record: TableRecord, tube: string, agent: string, batch: string, conc: string }

/** What stands in for a name where a row has none: 'Acid 0.1 M, Temperature 25 °C'. */
function partsText(record: TableRecord, parting: readonly ReadColumn[]): string {
  return parting.flatMap(({ index, spec, unit }) => {
    const cell = record.cells[index] ?? ''
    return cell === '' ? [] : [`${spec?.label ?? ''} ${cell} ${unit?.symbol ?? ''}`.trim()]
  }).join(', ')
}

/**
 * Tubes of a table with a row per point (or per result): rows that belong together are found by the tube's name, and where one name stands
 * for several agents, batches or concentrations, by these as well.
 */
export function longTubes(body: readonly TableRecord[], columns: readonly ReadColumn[], splitAlways: boolean): RawTube[] {
  const at = (role: Role) => columns.find(column => column.spec?.role === role) ?? null
  const text = (record: TableRecord, role: Role) => { const column = at(role); return column === null ? '' : record.cells[column.index] ?? '' }
  const aux = columns.filter(column => column.spec?.role === 'aux')
  const parting = aux.filter(column => column.spec?.parts)
  const lines = body.map(record => ({
    record, tube: text(record, 'tube') || partsText(record, parting), agent: text(record, 'agent'), batch: text(record, 'batch'), conc: text(record, 'conc'),
  }))
  return [...groupLines(lines, splitAlways)].map(([key, group]) => makeTube(key, group, at, aux))
}

function groupLines(lines: readonly Line[], splitAlways: boolean): Map<string, Line[]> {
  const groups = new Map<string, Line[]>()
  for (const [name, sameName] of groupBy(lines, line => line.tube)) {
    const several = (of: (line: Line) => string) => new Set(sameName.map(of).filter(value => value !== '')).size > 1
    const byAgent = several(line => line.agent) || name === ''
    const byBatch = several(line => line.batch) || name === ''
    const owner = (line: Line) => [name, byAgent ? line.agent : '', byBatch ? line.batch : ''].join('|')
    for (const [key, sameOwner] of groupBy(sameName, owner)) {
      if (!splitsByConcentration(sameOwner, splitAlways, name)) groups.set(key, sameOwner)
      else for (const [conc, tube] of groupBy(sameOwner, line => line.conc)) groups.set(`${key}|${conc}`, tube)
    }
  }
  return groups
}

/** A single row with another concentration is a slip of the pen, not a tube: left together, it shows up as a problem. */
function splitsByConcentration(lines: readonly Line[], splitAlways: boolean, name: string): boolean {
  const groups = [...groupBy(lines, line => line.conc).values()]
  return groups.length > 1 && (splitAlways || name === '' || groups.every(group => group.length >= 2))
}

function groupBy<T>(items: readonly T[], keyOf: (item: T) => string): Map<string, T[]> {
  const groups = new Map<string, T[]>()
  for (const item of items) {
    const key = keyOf(item)
    const group = groups.get(key)
    if (group) group.push(item)
    else groups.set(key, [item])
  }
  return groups
}

function makeTube(key: string, lines: readonly Line[], at: (role: Role) => ReadColumn | null, aux: readonly ReadColumn[]): RawTube {
  const cellOf = (record: TableRecord, column: ReadColumn | null): ValueCell | null =>
    column?.spec ? { text: record.cells[column.index] ?? '', row: record.row, column: column.index + 1, spec: column.spec, unit: column.unit } : null
  const valueCell = (record: TableRecord, role: Role): ValueCell | null => cellOf(record, at(role))
  const auxCells = (record: TableRecord): ValueCell[] => aux.flatMap(column => cellOf(record, column) ?? [])
  const firstNamed = (role: Role): NamedCell | null => {
    const column = at(role)
    const line = column === null ? undefined : lines.find(candidate => (candidate.record.cells[column.index] ?? '') !== '')
    return column === null || line === undefined ? null : { text: line.record.cells[column.index] ?? '', row: line.record.row, column: column.index + 1 }
  }
  const firstValue = (role: Role) => {
    const named = firstNamed(role)
    return named === null ? null : lines.map(line => valueCell(line.record, role)).find(cell => cell !== null && cell.row === named.row) ?? null
  }
  const points = lines.flatMap(({ record }) => {
    const y = valueCell(record, 'y')
    return y === null ? [] : [{ x: valueCell(record, 'x'), y, sigma: valueCell(record, 'sigma'), aux: auxCells(record) }]
  })
  const conc = firstValue('conc')
  const concs = lines.flatMap(line => valueCell(line.record, 'conc') ?? [])
  return {
    key, label: lines[0]?.tube ?? '', agent: firstNamed('agent'), batch: firstNamed('batch'), conc, concSe: firstValue('concError'),
    conflicts: concs.filter(cell => cell.text !== '' && cell.text !== conc?.text),
    points, place: rowsText(lines.map(line => line.record.row)), row: lines[0]?.record.row ?? 0, column: ((at('tube') ?? at('conc') ?? at('y'))?.index ?? 0) + 1,
  }
}

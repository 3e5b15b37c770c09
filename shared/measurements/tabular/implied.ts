import type { ColumnSpec } from '../types'
import type { ReadColumn } from './columns'
import { headerReadings, plainWords } from './headerText'
import type { FoundCondition } from './metadata'
import { columnLetter } from './place'
import type { TableStructure } from './structure'

/** Conditions that the words of a head settle: 'T2 (ms)' says that T2 was measured. */
export function impliedConditions(structure: TableStructure, columns: readonly ReadColumn[]): FoundCondition[] {
  const heads = columns.filter(column => column.spec !== null && !column.isTube)
    .map(column => ({ spec: column.spec, text: column.header, place: `head of column ${columnLetter(column.index)}` }))
  const rows = structure.attributes.map(row => ({ spec: row.spec, text: row.record.cells[0] ?? '', place: `row ${row.record.row}` }))
  return [...heads, ...rows].flatMap(({ spec, text, place }) => {
    const value = impliedBy(spec, text)
    return value === null ? [] : [{ ...value, place, text }]
  })
}

function impliedBy(spec: ColumnSpec | null, text: string): { key: string, value: string } | null {
  const implies = spec?.implies
  if (implies === undefined) return null
  const words = headerReadings(text).map(reading => plainWords(reading.name))
  const word = Object.keys(implies.words).find(candidate => words.includes(candidate))
  const value = word === undefined ? undefined : implies.words[word]
  return value === undefined ? null : { key: implies.key, value }
}

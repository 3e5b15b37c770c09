import { UNITS } from '../../science/units'
import type { UploadDraft } from '../draft'
import type { ColumnSpec, MeasurementKind } from '../types'
import type { ReadColumn } from './columns'
import { findUnit } from './headerText'
import { matchHeaders, specsOf } from './layout'
import type { DecimalMark } from './numberCell'
import { columnLetter } from './place'
import type { TableStructure } from './structure'
import type { LooseUnit, UnderstoodColumn } from './understood'
import { cornerUnit, timeColumns } from './wideTubes'

interface Input { columns: readonly ReadColumn[], structure: TableStructure, kind: MeasurementKind, decimal: DecimalMark }

const unitsOf = (spec: ColumnSpec | null): string[] =>
  spec === null || spec.dimension === 'text' || spec.dimension === 'none' ? [] : UNITS[spec.dimension].map(unit => unit.symbol)

/** Columns as the preview shows them, with a few of their cells. */
export function describeColumns({ columns, structure, kind, decimal }: Input): UnderstoodColumn[] {
  const y = specsOf(kind, 'y')[0] ?? null
  const times = structure.layout === 'rowPerTube' ? timeColumns({ kind, columns, header: structure.header, decimal }).map(time => time.column.index) : []
  return columns.map((column) => {
    const spec = times.includes(column.index) ? y : column.spec
    return {
      index: column.index, letter: columnLetter(column.index), header: column.header, stem: spec?.stem ?? null, label: spec?.label ?? 'not read',
      unit: column.unit?.symbol ?? null, units: unitsOf(spec), how: column.how,
      samples: structure.body.slice(0, 5).map(record => record.cells[column.index] ?? ''),
    }
  })
}

/** Units that stand at no column: of times across the head, and of rows that describe tubes. */
export function looseUnits({ columns, structure, kind, decimal, draft }: Input & { draft: UploadDraft }): LooseUnit[] {
  if (structure.layout === 'columnPerTube') return structure.attributes.flatMap(row => attributeUnit(row, draft))
  const x = specsOf(kind, 'x')[0]
  if (structure.layout !== 'rowPerTube' || x === undefined || x.dimension === 'text' || structure.header === null) return []
  const open = timeColumns({ kind, columns, header: structure.header, decimal }).filter(time => time.unit === null)
  if (open.length === 0) return []
  const chosen = draft.units?.[x.stem] ?? null
  const unit = chosen === null ? cornerUnit(matchHeaders(structure.header.cells, kind.columns)) : findUnit(chosen, x.dimension)
  return [{ stem: x.stem, label: x.label, unit: unit?.symbol ?? null, units: unitsOf(x), how: chosen === null ? 'from the header' : 'chosen', place: `row ${structure.header.row}` }]
}

function attributeUnit({ spec, unit, record }: TableStructure['attributes'][number], draft: UploadDraft): LooseUnit[] {
  if (spec.dimension === 'text' || spec.dimension === 'none') return []
  return [{ stem: spec.stem, label: spec.label, unit: unit?.symbol ?? null, units: unitsOf(spec), how: draft.units?.[spec.stem] ? 'chosen' : 'from the header', place: `row ${record.row}` }]
}

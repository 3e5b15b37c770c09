import type { Unit } from '../../science/units'
import type { ColumnSpec } from '../types'
import { findUnit } from './headerText'
import { parseNumberCell, type DecimalMark } from './numberCell'

const WITH_UNIT = /^([-+\u2212]?[\d.,]*\d(?:[ \u00A0\u2009\u202F'\u2019]\d{3})*(?:[.,]\d*)?(?:[eE][-+\u2212]?\d+)?)\s*([^\d\s.,][^\d]{0,19}(?:\d[^\d]{0,4})?)$/

/** A number with its unit behind it in the same cell: '50 ms', '0,5 mM', '12 %'. null where the cell is no such one for this column. */
export function readWithUnit(text: string, spec: ColumnSpec, decimal: DecimalMark): { value: number, unit: Unit } | null {
  if (spec.dimension === 'text' || text.length > 60) return null
  const match = WITH_UNIT.exec(text.trim())
  const unit = match === null ? null : findUnit(match[2] ?? '', spec.dimension)
  const number = match === null ? null : parseNumberCell(match[1] ?? '', decimal)
  return unit !== null && number?.ok ? { value: number.value, unit } : null
}

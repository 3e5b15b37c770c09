import { toStored, type Unit } from '../../science/units'
import type { ColumnSpec, UploadProblem } from '../types'
import { readWithUnit } from './cellUnit'
import { parseNumberCell, type DecimalMark, type NumberCell } from './numberCell'
import { blocks, note, quoted } from './problem'

/** A cell that should hold a number, with its place in the file. */
export interface ValueCell {
  text: string
  row: number
  column: number
  spec: ColumnSpec
  /** null = not known yet: then the cell has no value, and one problem of the column says so. */
  unit: Unit | null
}

/** Reads a cell into the stored unit; null where it is empty, unreadable (with a problem) or of unknown unit. */
export function readCell(cell: ValueCell, decimal: DecimalMark, problems: UploadProblem[]): number | null {
  const value = storedValue(cell, decimal, problems)
  if (value === null) return null
  const outside = domainProblem(cell, value)
  if (outside === null) return value
  note(problems, outside)
  return null
}

/** A unit in the cell itself counts for that cell, whatever the head says. */
function storedValue(cell: ValueCell, decimal: DecimalMark, problems: UploadProblem[]): number | null {
  const parsed = parseNumberCell(cell.text, decimal)
  if (parsed.ok) return cell.unit === null ? null : toStored(parsed.value, cell.unit)
  const measured = readWithUnit(cell.text, cell.spec, decimal)
  if (measured !== null) return toStored(measured.value, measured.unit)
  if (parsed.reason !== 'empty') note(problems, numberProblem(cell, parsed, decimal))
  return null
}

function numberProblem(cell: ValueCell, parsed: Extract<NumberCell, { ok: false }>, decimal: DecimalMark): UploadProblem {
  const what = `${cell.spec.label}: ${quoted(cell.text)}`
  const example = decimal === 'point' ? '1234.5' : '1234,5'
  const accepted = `a number such as ${example} (decimal ${decimal}), or an empty cell where nothing was measured`
  const where = { row: cell.row, column: cell.column }
  if (parsed.reason === 'notFinite') return blocks('notFinite', `${what} is no finite number.`, accepted, where)
  if (parsed.reason === 'otherDecimal') {
    const other = decimal === 'point' ? 'comma' : 'point'
    return blocks('otherDecimal', `${what} is written with a decimal ${other}, the rest of the file with a decimal ${decimal}.`, `${accepted}; or choose the decimal ${other} for the whole file`, where)
  }
  if (parsed.reason === 'grouped') return blocks('grouped', `${what} parts its thousands with points or commas.`, `${accepted}; thousands may be parted by spaces`, where)
  if (parsed.reason === 'bound') return blocks('bound', `${what} is a bound, and a point must be a number.`, accepted, where)
  return blocks('notNumber', `${what} is not a number.`, accepted, where)
}

function domainProblem({ spec, text, row, column }: ValueCell, value: number): UploadProblem | null {
  const name = `${spec.label}: ${quoted(text)}`
  if (spec.above !== undefined && value <= spec.above) {
    return blocks('outOfDomain', `${name} is not above ${spec.above}.`, `a number above ${spec.above}, or an empty cell`, { row, column })
  }
  if (spec.min !== undefined && value < spec.min) {
    return blocks('outOfDomain', `${name} is ${spec.min === 0 ? 'negative' : `below ${spec.min}`}.`, `a number of ${spec.min} or more`, { row, column })
  }
  if (spec.max !== undefined && value > spec.max) return blocks('outOfDomain', `${name} is above ${spec.max}.`, `a number of at most ${spec.max}`, { row, column })
  return null
}

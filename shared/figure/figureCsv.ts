import { csvText } from '../files/csv'
import { plainNotation } from '../notation'
import type { FigureSpec } from '../schemas/figure'
import { twinTable } from './layout'

/** The table twin of a figure as a CSV file, units in its heads. `lines` stand beneath the table, each behind #. */
export function figureCsv(figure: FigureSpec, lines: readonly string[]): string {
  const table = twinTable(figure)
  const head = table.columns.map(({ label, unit }) => plainNotation(unit ? `${label} (${unit})` : label))
  const rows = table.rows.map(row => table.columns.map(({ key }) => { const value = row[key]; return typeof value === 'string' ? plainNotation(value) : value ?? null }))
  return csvText([head, ...rows, ...lines.map(line => [`# ${plainNotation(line)}`])])
}

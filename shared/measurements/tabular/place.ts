/** Letters of a column as a sheet names it: 0 is A, 25 is Z, 26 is AA. */
export function columnLetter(index: number): string {
  const rest = Math.floor(index / 26)
  const last = String.fromCharCode(65 + index % 26)
  return rest === 0 ? last : columnLetter(rest - 1) + last
}

/** 'B3' for row 3 of the file and column 2, both from 1. */
export function cellName(row: number, column: number): string {
  return `${columnLetter(column - 1)}${row}`
}

/** 'rows 5 to 14', 'row 5', 'rows 5, 7 and 2 more', for places of tubes. */
export function rowsText(rows: readonly number[]): string {
  const first = rows[0]
  const last = rows.at(-1)
  if (first === undefined || last === undefined) return 'no rows'
  if (rows.length === 1) return `row ${first}`
  const isRun = rows.every((row, i) => row === first + i)
  if (isRun) return `rows ${first} to ${last}`
  if (rows.length <= 4) return `rows ${rows.join(', ')}`
  return `rows ${rows.slice(0, 3).join(', ')} and ${rows.length - 3} more`
}

/** Signs with which a spreadsheet begins a formula. A text that starts with one gets an apostrophe before it, so that opening a file runs nothing. */
const FORMULA = /^[=+\-@\t\r]/

/** One cell of a CSV file: quoted where it must be; texts that could be formulas made harmless, numbers left as they are. */
export function csvCell(value: string | number | null | undefined): string {
  if (value === null || value === undefined) return ''
  if (typeof value === 'number') return String(value)
  const isNumber = value.trim() !== '' && Number.isFinite(Number(value))
  const safe = !isNumber && FORMULA.test(value) ? `'${value}` : value
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe
}

/** Rows as a CSV file with CRLF line ends (RFC 4180). */
export function csvText(rows: readonly (readonly (string | number | null | undefined)[])[]): string {
  return rows.map(row => row.map(csvCell).join(',')).join('\r\n') + '\r\n'
}

/** A name that every file system takes, from words: letters, digits, dots and dashes. */
export function fileNameFrom(...words: readonly string[]): string {
  const name = words.filter(word => word !== '').join('-').normalize('NFKD').replace(/[^\w.-]+/g, '-').replace(/-{2,}/g, '-').replace(/^[-.]+|[-.]+$/g, '')
  return name.slice(0, 100) || 'figure'
}

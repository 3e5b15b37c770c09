/** What an uploaded table may be at most. Labels follow the width of their column in the database. */
export const UPLOAD_LIMITS = {
  bytes: 8 * 1024 * 1024,
  rows: 50_000,
  columns: 500,
  /** Cells of the read table: rows times its widest row. */
  cells: 600_000,
  tubes: 500,
  labelLength: 120,
  /** Characters of one cell. */
  cellLength: 5_000,
  /** Characters of one record; a longer one is no line of a table. */
  lineLength: 200_000,
  /** Characters of a head or label that are searched for names and units. */
  wordsLength: 200,
  /** Problems listed one by one; the rest is counted. */
  listedProblems: 200,
  /** Problems kept while reading; from then on only what decides whether the file can be stored. */
  keptProblems: 5_000,
  previewRows: 200,
} as const

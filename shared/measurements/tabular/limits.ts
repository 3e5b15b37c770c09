/** What an uploaded table may be at most. Labels follow the width of their column in the database. */
export const UPLOAD_LIMITS = {
  bytes: 8 * 1024 * 1024,
  rows: 50_000,
  columns: 500,
  tubes: 500,
  labelLength: 120,
  /** Problems listed one by one; the rest is counted. */
  listedProblems: 200,
  previewRows: 200,
} as const

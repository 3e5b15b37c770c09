/** What a workbook may be at most once it is inflated: checked before a byte of it is read as a sheet. */
export const ARCHIVE_LIMITS = {
  entries: 2_000,
  entryBytes: 48 * 1024 * 1024,
  totalBytes: 80 * 1024 * 1024,
  /** Inflated over packed, for entries above 1 MB: sheets reach 20 to 40. */
  ratio: 250,
  sheets: 60,
  nameLength: 300,
} as const

/** What a workbook may be when its entries are unpacked. A table of the largest size allowed stays far below. */
export const WORKBOOK_LIMITS = {
  entries: 2000,
  /** Bytes of one entry, and of all that are unpacked. */
  entryBytes: 64 * 1024 * 1024,
  totalBytes: 128 * 1024 * 1024,
  /** Unpacked over packed size of an entry above 1 MB. */
  ratio: 400,
  sheets: 60,
  seconds: 10,
} as const

import { readSheet } from 'read-excel-file/node'
import { blocks } from '../../shared/measurements/tabular/problem'
import { WORKBOOK_LIMITS } from '../../shared/measurements/workbook/limits'
import { markedCells, sheetParts, type SheetPart } from '../../shared/measurements/workbook/sheetXml'
import type { SheetGrid, WorkbookRead } from '../../shared/measurements/workbook/types'
import { repack, unpackWorkbook } from '../../shared/measurements/workbook/unpack'

const ACCEPTED = 'a workbook (XLSX) that opens without a password, or the sheet saved as CSV'
const refuse = (message: string, accepted = ACCEPTED): WorkbookRead => ({ ok: false, problem: blocks('workbook', message, accepted) })

/**
 * Reads every sheet of a workbook: unpacked within limits first, then by the reader of cells. Meant for a thread of its own, which may be stopped.
 * Dates become ISO days; numbers are the doubles that are stored.
 */
export async function readWorkbook(bytes: Uint8Array): Promise<WorkbookRead> {
  const unpacked = unpackWorkbook(bytes)
  if (!unpacked.ok) return refuse(unpacked.message, unpacked.accepted)
  const parts = sheetParts(unpacked.entries).filter(part => unpacked.entries.has(part.path))
  if (parts.length === 0) return refuse('The workbook has no sheet with cells.')
  if (parts.length > WORKBOOK_LIMITS.sheets) return refuse(`The workbook has ${parts.length} sheets; the limit is ${WORKBOOK_LIMITS.sheets}.`, 'the sheets needed in a workbook of their own')
  const archive = Buffer.from(repack(unpacked.entries))
  const sheets: SheetGrid[] = []
  for (const part of parts) {
    const grid = await readGrid(archive, part, markedCells(unpacked.entries.get(part.path)))
    if (typeof grid === 'string') return refuse(`Sheet “${part.name}” cannot be read: ${grid}`)
    sheets.push(grid)
  }
  return { ok: true, sheets }
}

/** The grid, or in words why the reader of cells refused it. */
async function readGrid(archive: Buffer, { name, isHidden }: SheetPart, marked: Pick<SheetGrid, 'formulas' | 'errors'>): Promise<SheetGrid | string> {
  try {
    const rows = await readSheet(archive, name, { trim: true })
    return { name, isHidden, ...marked, rows: rows.map(row => row.map(plainValue)) }
  }
  catch (error) {
    // The reader throws for whatever is not well-formed; that is the file's fault and is told to the person.
    return error instanceof Error ? error.message.slice(0, 200) : 'it is not well-formed.'
  }
}

function plainValue(value: unknown): string | number | boolean | null {
  if (value === null || value === undefined) return null
  if (typeof value === 'number') return Number.isFinite(value) ? value : String(value)
  if (value instanceof Date) return Number.isNaN(value.getTime()) ? null : value.toISOString().replace(/T00:00:00\.000Z$/, '')
  return typeof value === 'boolean' ? value : String(value)
}

import { strToU8, zipSync } from 'fflate'
import readCells from 'read-excel-file/universal'
import type { UploadProblem } from '../types'
import { blocks, quoted } from '../tabular/problem'
import { ACCEPTED_WORKBOOK, openArchive, type Archive } from './archive'
import { ARCHIVE_LIMITS } from './limits'
import { mainPart, readParts, relationsOf, type WorkbookParts } from './parts'
import { scanSheet } from './scanSheet'
import { sheetTable, type SheetTable } from './sheetTable'
import { percentStyles } from './styles'
import { decodeXml } from './xml'

export type WorkbookRead =
  | { ok: true, sheets: SheetTable[], hasLinks: boolean, hasMacros: boolean }
  | { ok: false, problem: UploadProblem }

type Refused = Extract<WorkbookRead, { ok: false }>
const refuse = (id: string, message: string, accepted = ACCEPTED_WORKBOOK): Refused => ({ ok: false, problem: blocks(id, message, accepted) })

/** True for the first bytes of a packed archive. */
export const isArchive = (bytes: Uint8Array): boolean => bytes[0] === 0x50 && bytes[1] === 0x4B && ((bytes[2] === 3 && bytes[3] === 4) || (bytes[2] === 5 && bytes[3] === 6))

/**
 * Reads every sheet of an XLSX workbook (ECMA-376) into text cells. The archive is opened by ourselves within its limits; of each sheet only cells that hold
 * something are handed on, so that what is read is bounded by what was checked. Nothing outside the file is ever followed.
 */
export async function readWorkbook(bytes: Uint8Array): Promise<WorkbookRead> {
  const archive = openArchive(bytes, name => /\.(?:xml|rels)$/i.test(name) && !/(?:^|\/)(?:media|drawings|charts|theme|customXml|docProps)\//.test(name))
  if (!archive.ok) return archive
  const documents = decodeAll(archive)
  if (!(documents instanceof Map)) return documents
  const main = mainPart(documents.get('_rels/.rels') ?? null, archive.names)
  const mainXml = main === null ? undefined : documents.get(main)
  if (main === null || mainXml === undefined) return notWorkbook(archive.names)
  const parts = readParts(main, mainXml, documents.get(relationsOf(main)) ?? '', archive.names)
  if (parts.sheets.length === 0) return refuse('noSheet', 'The workbook has no sheet of cells.', 'a workbook with the table on a sheet')
  if (parts.sheets.length > ARCHIVE_LIMITS.sheets) return refuse('tooManySheets', `The workbook has ${parts.sheets.length} sheets; the limit is ${ARCHIVE_LIMITS.sheets}.`, 'a workbook with fewer sheets')
  return readSheets(parts, documents)
}

function decodeAll({ entries }: Extract<Archive, { ok: true }>): Map<string, string> | Refused {
  const documents = new Map<string, string>()
  for (const [name, content] of entries) {
    const text = decodeXml(content)
    if (text === null) return refuse('unsafeXml', `${quoted(name)} in the workbook is no plain UTF-8 document, or declares entities of its own.`)
    documents.set(name, text)
  }
  return documents
}

function notWorkbook(names: readonly string[]): Refused {
  const first = names.find(name => !name.endsWith('/')) ?? ''
  if (names.includes('mimetype') && names.includes('content.xml')) return refuse('notWorkbook', 'The file is an OpenDocument file, not an XLSX workbook.', 'the sheet saved as XLSX or CSV')
  if (names.some(name => name.startsWith('word/') || name.startsWith('ppt/'))) return refuse('notWorkbook', 'The file is an office document without sheets.')
  if (names.some(name => /workbook\.bin$/.test(name))) return refuse('notWorkbook', 'The file is a binary workbook (XLSB).')
  if (names.some(name => /\.(?:zip|xlsx|xls|csv|tsv|txt)$/i.test(name))) return refuse('nestedArchive', `The file is a packed folder of files (${quoted(first)} among them), not a workbook.`, 'one of those files, unpacked')
  return refuse('notWorkbook', first === '' ? 'The file is an empty archive.' : `The file is a packed archive without a workbook in it (${quoted(first)} among its entries).`)
}

async function readSheets(parts: WorkbookParts, documents: ReadonlyMap<string, string>): Promise<WorkbookRead> {
  const scans = parts.sheets.map(sheet => scanSheet(documents.get(sheet.path) ?? ''))
  const cells = await readBare(bareWorkbook(parts, scans.map(scan => scan.bare), documents))
  if (!(cells instanceof Map)) return cells
  const percents = percentStyles(parts.styles === null ? '' : documents.get(parts.styles) ?? '')
  const sheets = parts.sheets.map((sheet, index) => sheetTable(sheet, { scan: scans[index]!, rows: cells.get(String(index + 1)) ?? [], percents }))
  return { ok: true, sheets, hasLinks: parts.hasLinks, hasMacros: parts.hasMacros }
}

const PACKAGE = 'http://schemas.openxmlformats.org/package/2006/relationships'
const OFFICE = 'http://schemas.openxmlformats.org/officeDocument/2006/relationships'

/** A workbook of the same cells with nothing else in it, at the paths where the reader looks. Sheets are called by their number. */
function bareWorkbook(parts: WorkbookParts, sheets: readonly string[], documents: ReadonlyMap<string, string>): Uint8Array<ArrayBuffer> {
  const files: Record<string, Uint8Array> = {}
  const relations: string[] = []
  const add = (path: string, type: string, text: string | undefined): string => {
    if (text !== undefined) files[`xl/${path}`] = strToU8(text)
    if (text !== undefined) relations.push(`<Relationship Id="r${relations.length + 1}" Type="${OFFICE}/${type}" Target="${path}"/>`)
    return `r${relations.length}`
  }
  const listed = sheets.map((xml, i) => `<sheet name="${i + 1}" sheetId="${i + 1}" r:id="${add(`worksheets/sheet${i + 1}.xml`, 'worksheet', xml)}"/>`)
  if (parts.strings !== null) add('sharedStrings.xml', 'sharedStrings', documents.get(parts.strings))
  if (parts.styles !== null) add('styles.xml', 'styles', documents.get(parts.styles))
  files['xl/workbook.xml'] = strToU8(`<workbook xmlns:r="${OFFICE}"><workbookPr date1904="${parts.has1904 ? 1 : 0}"/><sheets>${listed.join('')}</sheets></workbook>`)
  files['xl/_rels/workbook.xml.rels'] = strToU8(`<Relationships xmlns="${PACKAGE}">${relations.join('')}</Relationships>`)
  return zipSync(files, { level: 0 }) as Uint8Array<ArrayBuffer>
}

/** Whatever the reader cannot make sense of is a fault of the file: only documents of the file reach it, within limits. Its words are passed on. */
async function readBare(bytes: Uint8Array<ArrayBuffer>): Promise<Map<string, readonly (readonly unknown[])[]> | Refused> {
  try {
    const sheets = await readCells(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength), { trim: false })
    return new Map(sheets.map(({ sheet, data }) => [sheet, data]))
  }
  catch (error) {
    if (!(error instanceof Error)) throw error
    return refuse('brokenWorkbook', `The cells of the workbook cannot be read: ${quoted(error.message)}.`, 'the workbook saved once more by a spreadsheet program, or the sheet saved as CSV')
  }
}

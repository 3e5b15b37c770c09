import { Unzip, UnzipInflate, zipSync } from 'fflate'
import { WORKBOOK_LIMITS } from './limits'

/** Entries of a workbook, unpacked within the limits. */
export type Unpacked = { ok: true, entries: Map<string, Uint8Array> } | { ok: false, message: string, accepted: string }

const ACCEPTED = 'a workbook (XLSX) that opens without a password, or the sheet saved as CSV'
/** The parts that hold cells and how they are written; pictures, macros and printer settings are never unpacked. */
const WANTED = /^(?:\[Content_Types\]\.xml|_rels\/\.rels|xl\/workbook\.xml|xl\/_rels\/workbook\.xml\.rels|xl\/styles\.xml|xl\/sharedStrings\.xml|xl\/worksheets\/[^/]+\.xml)$/i
const CHUNK = 64 * 1024

class Refusal extends Error {}

/**
 * Unpacks the parts of a workbook that hold cells. Sizes are counted while bytes come out, whatever the archive says of itself, and the first limit passed
 * ends it.
 */
export function unpackWorkbook(bytes: Uint8Array): Unpacked {
  const entries = new Map<string, Uint8Array>()
  let count = 0
  let total = 0
  const unzip = new Unzip((file) => {
    count += 1
    if (count > WORKBOOK_LIMITS.entries) throw new Refusal(`The archive has more than ${WORKBOOK_LIMITS.entries} entries.`)
    const name = file.name.replaceAll('\\', '/').replace(/^\//, '')
    if (name.split('/').includes('..')) throw new Refusal('The archive holds a path that leads outside of it.')
    if (!WANTED.test(name)) return
    const parts: Uint8Array[] = []
    let size = 0
    file.ondata = (error, chunk, final) => {
      if (error) throw new Refusal(`The archive is damaged or encrypted: ${name} cannot be unpacked.`)
      size += chunk.length
      total += chunk.length
      checkSize(name, { size, total, packed: file.size ?? 0 })
      parts.push(chunk)
      if (final) entries.set(name, joined(parts, size))
    }
    file.start()
  })
  unzip.register(UnzipInflate)
  try {
    for (let at = 0; at < bytes.length; at += CHUNK) unzip.push(bytes.subarray(at, at + CHUNK), at + CHUNK >= bytes.length)
  }
  catch (error) {
    return { ok: false, message: error instanceof Refusal ? error.message : 'The archive is damaged or cut short.', accepted: ACCEPTED }
  }
  if (!entries.has('xl/workbook.xml')) return { ok: false, message: count === 0 ? 'The archive is damaged or cut short.' : 'The archive is no workbook: it has no list of sheets.', accepted: ACCEPTED }
  for (const [name, entry] of entries) {
    if (/<!(?:DOCTYPE|ENTITY)/i.test(headOf(entry))) return { ok: false, message: `${name} declares entities, which no workbook needs.`, accepted: ACCEPTED }
  }
  return { ok: true, entries }
}

function checkSize(name: string, { size, total, packed }: { size: number, total: number, packed: number }): void {
  const megabytes = (value: number) => Math.round(value / 1024 / 1024)
  if (size > WORKBOOK_LIMITS.entryBytes) throw new Refusal(`${name} unpacks to more than ${megabytes(WORKBOOK_LIMITS.entryBytes)} MB.`)
  if (total > WORKBOOK_LIMITS.totalBytes) throw new Refusal(`The workbook unpacks to more than ${megabytes(WORKBOOK_LIMITS.totalBytes)} MB.`)
  if (packed > 0 && size > 1024 * 1024 && size > WORKBOOK_LIMITS.ratio * packed) throw new Refusal(`${name} unpacks to more than ${WORKBOOK_LIMITS.ratio} times its size.`)
}

function joined(parts: readonly Uint8Array[], size: number): Uint8Array {
  const all = new Uint8Array(size)
  let at = 0
  for (const part of parts) {
    all.set(part, at)
    at += part.length
  }
  return all
}

const headOf = (entry: Uint8Array): string => new TextDecoder().decode(entry.subarray(0, 4096))

/** The vetted entries as an archive again, stored without packing: what the reader of cells is given. */
export function repack(entries: ReadonlyMap<string, Uint8Array>): Uint8Array {
  return zipSync(Object.fromEntries(entries), { level: 0 })
}

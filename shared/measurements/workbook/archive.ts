import { Inflate } from 'fflate'
import type { UploadProblem } from '../types'
import { blocks, quoted } from '../tabular/problem'
import { crc32 } from './crc32'
import { ARCHIVE_LIMITS } from './limits'

export const ACCEPTED_WORKBOOK = 'an XLSX workbook as a spreadsheet program saves it, without a password, or the sheet saved as CSV'

/** An entry as the archive's directory lists it. */
interface Listed { name: string, method: number, packed: number, size: number, crc: number, at: number }

export type Archive =
  | { ok: true, names: string[], entries: Map<string, Uint8Array> }
  | { ok: false, problem: UploadProblem }

const END = 0x06054B50
const CENTRAL = 0x02014B50
const LOCAL = 0x04034B50

class Refusal extends Error {
  readonly problem: UploadProblem
  constructor(id: string, message: string, accepted = ACCEPTED_WORKBOOK) {
    super(message)
    this.problem = blocks(id, message, accepted)
  }
}

/**
 * Opens a packed archive and inflates the entries that are wanted, each checked against its length and CRC-32. Names, lengths, ratio and number of entries
 * are looked at before anything is inflated, and inflating stops at the length that was declared: a small file cannot become a large one.
 */
export function openArchive(bytes: Uint8Array, wanted: (name: string) => boolean): Archive {
  try {
    const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength)
    const listed = readDirectory(view, bytes)
    checkEntries(listed)
    const entries = new Map(listed.filter(entry => wanted(entry.name)).map(entry => [entry.name, inflate(entry, view, bytes)]))
    return { ok: true, names: listed.map(entry => entry.name), entries }
  }
  catch (error) {
    if (error instanceof Refusal) return { ok: false, problem: error.problem }
    throw error
  }
}

function readDirectory(view: DataView, bytes: Uint8Array): Listed[] {
  const end = findEnd(view)
  if (end === null) throw new Refusal('brokenArchive', 'The workbook is cut short: its directory is missing.', 'the whole file, copied or saved once more')
  const count = view.getUint16(end + 10, true)
  let at = view.getUint32(end + 16, true)
  if (count === 0xFFFF || at === 0xFFFFFFFF) throw new Refusal('brokenArchive', 'The archive is of the 64-bit form, which no workbook of this size needs.')
  if (count > ARCHIVE_LIMITS.entries) throw new Refusal('archiveTooLarge', `The archive has ${count} entries; the limit is ${ARCHIVE_LIMITS.entries}.`)
  return Array.from({ length: count }, () => {
    if (at + 46 > end || view.getUint32(at, true) !== CENTRAL) throw new Refusal('brokenArchive', 'The directory of the workbook is damaged.', 'the whole file, copied or saved once more')
    const [nameLength, extra, comment] = [view.getUint16(at + 28, true), view.getUint16(at + 30, true), view.getUint16(at + 32, true)]
    if ((view.getUint16(at + 8, true) & 1) === 1) throw new Refusal('encrypted', 'The archive is locked with a password.')
    const entry = {
      name: new TextDecoder().decode(bytes.subarray(at + 46, at + 46 + nameLength)), method: view.getUint16(at + 10, true), crc: view.getUint32(at + 16, true),
      packed: view.getUint32(at + 20, true), size: view.getUint32(at + 24, true), at: view.getUint32(at + 42, true),
    }
    at += 46 + nameLength + extra + comment
    return entry
  })
}

/** The end record stands at the end, with a comment of at most 65,535 bytes behind it. */
function findEnd(view: DataView): number | null {
  for (let at = view.byteLength - 22; at >= Math.max(0, view.byteLength - 22 - 0xFFFF); at--) {
    if (view.getUint32(at, true) === END) return at
  }
  return null
}

function checkEntries(entries: readonly Listed[]): void {
  const names = new Set<string>()
  let total = 0
  for (const { name, size, packed } of entries) {
    const isPath = name === '' || name.length > ARCHIVE_LIMITS.nameLength || name.startsWith('/') || name.includes('\\') || name.split('/').includes('..') || /\p{Cc}/u.test(name) || /^[a-z]:/i.test(name)
    if (isPath) throw new Refusal('entryName', `The archive has an entry named ${quoted(name)}, which leads out of it or is no name.`)
    if (names.has(name)) throw new Refusal('entryName', `The archive has two entries named ${quoted(name)}.`)
    names.add(name)
    total += size
    if (size > ARCHIVE_LIMITS.entryBytes) throw new Refusal('archiveTooLarge', `${quoted(name)} would have ${size} bytes when inflated; the limit is ${ARCHIVE_LIMITS.entryBytes}.`)
    if (size > 1024 * 1024 && size / Math.max(1, packed) > ARCHIVE_LIMITS.ratio) throw new Refusal('archiveTooLarge', `${quoted(name)} grows ${Math.round(size / Math.max(1, packed))} times when inflated; the limit is ${ARCHIVE_LIMITS.ratio}.`)
    if (total > ARCHIVE_LIMITS.totalBytes) throw new Refusal('archiveTooLarge', `The archive would have more than ${ARCHIVE_LIMITS.totalBytes} bytes when inflated.`)
  }
}

function inflate(entry: Listed, view: DataView, bytes: Uint8Array): Uint8Array {
  const damaged = () => new Refusal('brokenArchive', `${quoted(entry.name)} in the workbook is damaged.`, 'the whole file, copied or saved once more')
  if (entry.at + 30 > bytes.length || view.getUint32(entry.at, true) !== LOCAL) throw damaged()
  const start = entry.at + 30 + view.getUint16(entry.at + 26, true) + view.getUint16(entry.at + 28, true)
  if (start + entry.packed > bytes.length) throw damaged()
  const packed = bytes.subarray(start, start + entry.packed)
  if (entry.method !== 0 && entry.method !== 8) throw new Refusal('brokenArchive', `${quoted(entry.name)} is packed by method ${entry.method}.`)
  const content = entry.method === 0 ? packed : inflated(packed, entry.size)
  if (content === null || content.length !== entry.size || crc32(content) !== entry.crc) throw damaged()
  return content
}

const STEP = 16 * 1024

/** null where the bytes are not deflated ones, or more come out than were declared. */
function inflated(packed: Uint8Array, size: number): Uint8Array | null {
  const content = new Uint8Array(size)
  let filled = 0
  let isOver = false
  const stream = new Inflate((chunk) => {
    if (filled + chunk.length > size) isOver = true
    else content.set(chunk, filled)
    filled += chunk.length
  })
  try {
    for (let at = 0; (at < packed.length || at === 0) && !isOver; at += STEP) stream.push(packed.subarray(at, at + STEP), at + STEP >= packed.length)
  }
  catch (error) {
    // The library has numbered errors for bytes that it cannot inflate; anything else is ours.
    if (error instanceof Error && 'code' in error && typeof error.code === 'number') return null
    throw error
  }
  return isOver || filled !== size ? null : content
}

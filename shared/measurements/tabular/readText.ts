import type { UploadProblem } from '../types'
import { UPLOAD_LIMITS } from './limits'
import { blocks } from './problem'

export type Encoding = 'utf-8' | 'utf-16le' | 'utf-16be' | 'windows-1252'

export type TextRead =
  | { ok: true, text: string, encoding: Encoding }
  | { ok: false, problem: UploadProblem }

const ACCEPTED = 'a text table (CSV or TSV) with commas, semicolons or tabs between columns, or an XLSX workbook'

/** First bytes that betray a file which is no text, with the words for it. */
const SIGNATURES: readonly { bytes: readonly number[], what: string }[] = [
  { bytes: [0x50, 0x4B, 0x03, 0x04], what: 'a spreadsheet workbook or another packed archive' },
  { bytes: [0xD0, 0xCF, 0x11, 0xE0], what: 'an old office document, or a workbook with a password' },
  { bytes: [0x25, 0x50, 0x44, 0x46], what: 'a PDF document' },
  { bytes: [0x89, 0x50, 0x4E, 0x47], what: 'a PNG picture' },
  { bytes: [0xFF, 0xD8, 0xFF], what: 'a JPEG picture' },
  { bytes: [0x1F, 0x8B], what: 'a packed archive' },
]

/**
 * Decodes the bytes of an upload.
 *
 * UTF-8 and UTF-16, each with or without byte-order mark; text that is no UTF-8 and holds no control characters is taken for the
 * Windows western code page, in which ° and µ are single bytes. Line ends become \n. Anything else is refused with a reason.
 */
export function readText(bytes: Uint8Array): TextRead {
  if (bytes.length === 0) return refuse('empty', 'The file is empty (0 bytes).', ACCEPTED)
  if (bytes.length > UPLOAD_LIMITS.bytes) {
    return refuse('tooLarge', `The file has ${bytes.length} bytes; the limit is ${UPLOAD_LIMITS.bytes} (8 MB).`, 'a file of at most 8 MB: split it by agent')
  }
  const signature = SIGNATURES.find(candidate => candidate.bytes.every((byte, i) => bytes[i] === byte))
  if (signature) return refuse('notText', `Not a text table: the file is ${signature.what}.`, `${ACCEPTED}; save the sheet as CSV`)
  const decoded = decode(bytes)
  if (decoded === null || controlCharacters(decoded.text) > 0) {
    return refuse('notText', 'Not a text table: the file holds bytes that no text has.', ACCEPTED)
  }
  const text = decoded.text.replace(/\r\n?/g, '\n')
  if (text.trim() === '') return refuse('empty', 'The file holds only blank space.', ACCEPTED)
  return { ok: true, text, encoding: decoded.encoding }
}

function refuse(id: string, message: string, accepted: string): TextRead {
  return { ok: false, problem: blocks(id, message, accepted) }
}

function decode(bytes: Uint8Array): { text: string, encoding: Encoding } | null {
  const encoding: Encoding = bytes[0] === 0xFF && bytes[1] === 0xFE ? 'utf-16le' : bytes[0] === 0xFE && bytes[1] === 0xFF ? 'utf-16be' : unmarkedWide(bytes) ?? 'utf-8'
  const text = tryDecode(bytes, encoding)
  if (text !== null) return { text, encoding }
  if (encoding !== 'utf-8') return null
  const western = tryDecode(bytes, 'windows-1252')
  return western === null ? null : { text: western, encoding: 'windows-1252' }
}

/** UTF-16 without its mark: Latin text has a zero in every second byte, and on one side only. */
function unmarkedWide(bytes: Uint8Array): Encoding | null {
  const head = bytes.subarray(0, 2000)
  if (bytes.length % 2 !== 0 || head.length < 8) return null
  let [even, odd] = [0, 0]
  head.forEach((byte, index) => { if (byte === 0) { if (index % 2 === 0) even++; else odd++ } })
  const most = head.length / 2 * 0.7
  return odd >= most && even === 0 ? 'utf-16le' : even >= most && odd === 0 ? 'utf-16be' : null
}

/** null where the bytes are not of this encoding: the decoder has no other way to say so than to throw. */
function tryDecode(bytes: Uint8Array, encoding: Encoding): string | null {
  try {
    return new TextDecoder(encoding, { fatal: true }).decode(bytes)
  }
  catch (error) {
    if (error instanceof TypeError || error instanceof RangeError) return null
    throw error
  }
}

function controlCharacters(text: string): number {
  let count = 0
  for (let i = 0; i < text.length; i++) {
    const code = text.charCodeAt(i)
    const isSpace = code === 9 || code === 10 || code === 11 || code === 12 || code === 13
    if ((code < 32 && !isSpace) || (code >= 0x7F && code <= 0x9F) || code === 0xFFFD) count++
  }
  return count
}

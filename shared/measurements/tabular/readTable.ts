import type { UploadDraft } from '../draft'
import type { MeasurementKind, UploadProblem } from '../types'
import { UPLOAD_LIMITS } from './limits'
import { readText } from './readText'
import { sheetSource } from './source'
import type { SheetFacts } from './tubeSheet'
import { understandSource, understandTable } from './understand'
import type { Understood } from './understood'
import { isArchive, readWorkbook } from '../workbook/readWorkbook'

/** What is known of bytes that hold no table at all. */
export function nothingRead(problem: UploadProblem): Understood {
  return {
    workbook: null, encoding: null, tubeSheet: null, preview: [], rowCount: 0, columnCount: 0, metadata: [], delimiter: null, decimal: 'point', headerRow: null, layout: 'long',
    how: { delimiter: 'guessed', decimal: 'guessed', headerRow: 'guessed', layout: 'guessed' }, columns: [], looseUnits: [], found: [], conditions: {}, tubes: [], series: [],
    problems: [problem], canStore: false,
  }
}

/** Reads the bytes of an upload, a text or a workbook, for a measurement kind. The same bytes, draft and tube sheet always give the same answer. */
export async function readTable(bytes: Uint8Array, { kind, draft, sheet = null }: { kind: MeasurementKind, draft: UploadDraft, sheet?: SheetFacts | null }): Promise<Understood> {
  if (bytes.length <= UPLOAD_LIMITS.bytes && isArchive(bytes)) {
    const workbook = await readWorkbook(bytes)
    return workbook.ok ? understandSource(sheetSource(workbook, kind, draft), { kind, draft, sheet }) : nothingRead(workbook.problem)
  }
  const read = readText(bytes)
  return read.ok ? understandTable({ text: read.text, kind, draft, encoding: read.encoding, sheet }) : nothingRead(read.problem)
}

import { AppError } from '../../shared/errors'
import type { UploadDraft } from '../../shared/measurements/draft'
import { readText } from '../../shared/measurements/tabular/readText'
import { understandTable } from '../../shared/measurements/tabular/understand'
import type { Understood } from '../../shared/measurements/tabular/understood'
import { workbookTable, type WorkbookTable } from '../../shared/measurements/workbook/toTable'
import type { MeasurementKind, UploadProblem } from '../../shared/measurements/types'
import type { Deps } from '../platform/deps'
import { sha256 } from '../platform/hashes'
import { findStaged, type StagedRow } from '../queries/uploads'
import type { UploadTarget } from '../queries/uploadTargets'

export const UPLOAD_NOT_FOUND = 'There is no such upload, or it is somebody else\'s.'
export const DEFAULT_KIND = 'relax.t1.ir'

/** @throws AppError('notFound'), also for an upload that somebody else staged */
export async function ownStaged(deps: Pick<Deps, 'db'>, key: { programmeId: string, personId: string, id: string }): Promise<StagedRow> {
  const staged = await findStaged(deps.db, key)
  if (!staged) throw new AppError('notFound', UPLOAD_NOT_FOUND)
  return staged
}

/** @throws AppError('expired' or 'conflict') when the upload is no longer staged */
export function refuseUnlessStaged(staged: StagedRow, now: Date): void {
  if (staged.state === 'expired' || (staged.state === 'staged' && staged.expiresAt <= now)) {
    throw new AppError('expired', 'This upload was kept for 24 hours and is gone. Nothing of it was stored.', { accepted: 'the file uploaded again' })
  }
  if (staged.state !== 'staged') throw new AppError('conflict', `This upload was ${staged.state} already.`, { data: { state: staged.state } })
}

/** The kind that a draft names; the first one where it names none. @throws AppError('invalidInput') */
export function kindOf(deps: Pick<Deps, 'kinds'>, draft: UploadDraft): MeasurementKind {
  const kind = draft.kind ? deps.kinds[draft.kind] : deps.kinds[DEFAULT_KIND] ?? Object.values(deps.kinds)[0]
  if (!kind) throw new AppError('invalidInput', `No measurement is called ${draft.kind ?? DEFAULT_KIND}.`, { field: 'kind', accepted: Object.keys(deps.kinds).join(', ') })
  return kind
}

/** The staged bytes. @throws Error when they are gone or changed, which is never a person's doing */
export async function stagedBytes(deps: Pick<Deps, 'storage'>, staged: StagedRow): Promise<Uint8Array> {
  const bytes = await deps.storage.get(staged.storageKey)
  if (!bytes) throw new Error(`The bytes of upload ${staged.id} are not in the storage.`)
  if (!sha256(bytes).equals(staged.sha256)) throw new Error(`The bytes of upload ${staged.id} do not match their SHA-256.`)
  return bytes
}

const NOTHING: Understood = {
  preview: [], rowCount: 0, columnCount: 0, workbook: null, encoding: null, metadata: [], delimiter: null, decimal: 'point', headerRow: null, layout: 'long',
  how: { delimiter: 'guessed', decimal: 'guessed', headerRow: 'guessed', layout: 'guessed' }, columns: [], looseUnits: [], found: [], conditions: {}, tubes: [], series: [],
  problems: [], canStore: false,
}

/** Reads bytes under a draft and looks its agents up: the one reading that preview shows and confirm stores. */
export async function readUpload(deps: Pick<Deps, 'workbooks'>, bytes: Uint8Array, { kind, draft, targets }: { kind: MeasurementKind, draft: UploadDraft, targets: readonly UploadTarget[] }): Promise<Understood> {
  const read = isArchive(bytes) ? await readSheets(deps, bytes, draft) : readText(bytes)
  if (!read.ok) return { ...NOTHING, problems: [read.problem] }
  const understood = { ...understandTable({ text: read.text, kind, draft }), encoding: 'encoding' in read ? read.encoding : null }
  const unknown = understood.series.flatMap(part => targetProblem(part, targets) ?? [])
  const problems = [...understood.problems, ...unknown]
  return { ...understood, problems, canStore: understood.canStore && unknown.length === 0 }
}

/** Workbooks are archives, and archives begin with these bytes; whether it is a workbook is seen when it is unpacked. */
const isArchive = (bytes: Uint8Array): boolean => bytes.length > 4 && bytes[0] === 0x50 && bytes[1] === 0x4B && bytes[2] === 0x03 && bytes[3] === 0x04

async function readSheets({ workbooks }: Pick<Deps, 'workbooks'>, bytes: Uint8Array, draft: UploadDraft): Promise<{ ok: true, text: WorkbookTable } | { ok: false, problem: UploadProblem }> {
  const read = await workbooks.read(bytes)
  return read.ok ? { ok: true, text: workbookTable(read.sheets, draft.sheet) } : read
}

/** Where the programme has no such agent, or the agent no such batch. What is not named at all is a problem of the table already. */
function targetProblem({ complexCode, lot, tubes }: Understood['series'][number], targets: readonly UploadTarget[]): UploadProblem | null {
  if (complexCode === null) return null
  const batches = targets.filter(target => target.complexCode === complexCode)
  const which = tubes.filter(tube => tube.role === 'sample').map(tube => tube.tubeNo).join(', ')
  const base = { row: null, column: null, severity: 'blocks' } as const
  if (batches.length === 0) {
    return { ...base, id: 'unknownAgent', field: 'complexCode', message: `No agent of this programme is called ${complexCode} (tubes ${which}).`, accepted: listed(targets.map(target => target.complexCode), 'an agent registered first') }
  }
  if (lot === null || batches.some(target => target.lot === lot)) return null
  return { ...base, id: 'unknownBatch', field: 'lot', message: `${complexCode} has no batch ${lot} (tubes ${which}).`, accepted: listed(batches.map(target => target.lot), 'a batch registered first') }
}

function listed(words: readonly string[], otherwise: string): string {
  const known = [...new Set(words)]
  if (known.length === 0) return otherwise
  return known.length > 12 ? `${known.slice(0, 12).join(', ')} and ${known.length - 12} more, or ${otherwise}` : `${known.join(', ')}, or ${otherwise}`
}

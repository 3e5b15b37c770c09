import { AppError } from '../../shared/errors'
import type { UploadDraft } from '../../shared/measurements/draft'
import { guessKind } from '../../shared/measurements/guessKind'
import { MEASUREMENTS } from '../../shared/measurements/index'
import { asks } from '../../shared/measurements/tabular/problem'
import { readTable } from '../../shared/measurements/tabular/readTable'
import type { SheetFacts } from '../../shared/measurements/tabular/tubeSheet'
import type { Understood } from '../../shared/measurements/tabular/understood'
import { isArchive } from '../../shared/measurements/workbook/readWorkbook'
import type { MeasurementKind, UploadProblem } from '../../shared/measurements/types'
import type { Deps } from '../platform/deps'
import { sha256 } from '../platform/hashes'
import { currentReferences } from '../queries/instruments'
import { findTubeSheet, type TubeSheetRow } from '../queries/tubeSheets'
import { findStaged, type StagedRow } from '../queries/uploads'
import { withRegistered } from './registeredFacts'
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

/** The kind that a draft names; where it names none, the one whose words the file speaks. @throws AppError('invalidInput') */
export function kindOf(deps: Pick<Deps, 'kinds'>, draft: UploadDraft, bytes: Uint8Array): MeasurementKind {
  const guessed = draft.kind || isArchive(bytes) ? null : guessKind(bytes, Object.values(deps.kinds))
  const kind = draft.kind ? deps.kinds[draft.kind] : guessed ?? deps.kinds[DEFAULT_KIND] ?? Object.values(deps.kinds)[0]
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

interface Reading { programmeId: string, kind: MeasurementKind, draft: UploadDraft, targets: readonly UploadTarget[] }

/**
 * Reads bytes under a draft and looks its agents up: the one reading that preview shows and confirm stores. A tube sheet that the person or the file names
 * fills in what the file leaves open.
 */
export async function readUpload(deps: Pick<Deps, 'tables' | 'db'>, bytes: Uint8Array, { programmeId, kind, draft, targets }: Reading): Promise<Understood> {
  const alone = draft.tubeSheet ? null : await readBytes(deps, bytes, { kind, draft, sheet: null })
  const code = draft.tubeSheet === undefined ? alone?.tubeSheet ?? null : draft.tubeSheet
  const row = code === null ? null : await findTubeSheet(deps.db, programmeId, code)
  const first = row === null && alone !== null ? alone : await readBytes(deps, bytes, { kind, draft, sheet: row?.body ?? null })
  const registered = await withRegistered(deps, first, { programmeId, kind, draft })
  const named = await withReferences(deps, first, { programmeId, draft: registered.draft })
  const read = named === draft ? first : await readBytes(deps, bytes, { kind, draft: named, sheet: row?.body ?? null })
  const understood = { ...read, found: [...read.found, ...registered.found] }
  const unknown = [...registered.problems, ...understood.series.flatMap(part => targetProblem(part, targets) ?? []), ...tubeSheetProblems(code, { row, kind })]
  const problems = [...understood.problems, ...unknown]
  return { ...understood, problems, canStore: understood.canStore && unknown.every(problem => problem.severity !== 'blocks') }
}

/** The draft with the role of the instrument's reference tube filled in, where a tube goes by its name and nobody chose another role; the same draft where there is none. */
async function withReferences({ db }: Pick<Deps, 'db'>, { conditions, tubes }: Understood, { programmeId, draft }: Pick<Reading, 'programmeId' | 'draft'>): Promise<UploadDraft> {
  const { instrument } = conditions
  const label = typeof instrument !== 'string' ? null : (await currentReferences(db, programmeId)).find(one => one.instrument === instrument)?.label.toLowerCase() ?? null
  const found = label === null ? [] : tubes.filter(tube => tube.label.toLowerCase() === label && tube.role !== 'reference' && tube.how.role === 'guessed')
  if (found.length === 0) return draft
  const chosen = draft.tubes ?? []
  const added = found.map(({ key }) => ({ ...chosen.find(one => one.key === key), key, role: 'reference' as const }))
  return { ...draft, tubes: [...chosen.filter(one => !found.some(tube => tube.key === one.key)), ...added] }
}

/** Up to this size a text is read at once: it takes a few milliseconds, and a thread would take longer to begin. */
const SMALL_BYTES = 96 * 1024

/** A thread knows the registered kinds; one that only a test knows is read here. */
function readBytes({ tables }: Pick<Deps, 'tables'>, bytes: Uint8Array, { kind, draft, sheet }: { kind: MeasurementKind, draft: UploadDraft, sheet: SheetFacts | null }): Promise<Understood> {
  const isSmall = bytes.length <= SMALL_BYTES && !isArchive(bytes)
  return isSmall || MEASUREMENTS[kind.kind] !== kind ? readTable(bytes, { kind, draft, sheet }) : tables.read({ bytes, kind: kind.kind, draft, sheet })
}

function tubeSheetProblems(code: string | null, { row, kind }: { row: TubeSheetRow | null, kind: MeasurementKind }): UploadProblem[] {
  if (code === null) return []
  if (row === null) return [asks('unknownTubeSheet', `The programme has no tube sheet ${code}.`, 'a tube sheet of this programme, or none', { field: 'tubeSheet' })]
  return row.kind === kind.kind ? [] : [asks('otherKind', `Tube sheet ${code} was made for another measurement (${row.kind}); its tubes are used all the same.`, 'the measurement that the sheet was made for, or another sheet', { field: 'tubeSheet' })]
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

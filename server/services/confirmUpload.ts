import { AppError } from '../../shared/errors'
import type { UploadDraft } from '../../shared/measurements/draft'
import type { SeriesPart, Understood } from '../../shared/measurements/tabular/understood'
import type { MeasurementKind } from '../../shared/measurements/types'
import type { Actor } from '../../shared/permissions'
import type { ConfirmedDto } from '../../shared/schemas/upload'
import { canonicalJson } from '../../shared/science/canonical'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { hex } from '../platform/hashes'
import { addInstrument } from '../queries/presets'
import { findUpload, insertUpload, settleStaged, type StagedRow } from '../queries/uploads'
import { type UploadTarget, uploadTargets } from '../queries/uploadTargets'
import { recordSeries } from './recordSeries'
import { unitOfWork, type Work } from './unitOfWork'
import { kindOf, ownStaged, readUpload, refuseUnlessStaged, stagedBytes } from './uploadReading'

export interface ConfirmInput { actor: Actor, programmeId: string, id: string, draft: UploadDraft, idempotency?: { key: string, request: unknown } | undefined }

interface Plan { kind: MeasurementKind, understood: Understood, targets: readonly UploadTarget[] }

/**
 * Stores an upload: its file, one series for each agent and batch with a copy of the shared blank, and a fit of each, in one transaction. The bytes are
 * read anew under the choices given, so that what is stored is what the file says and not what a browser showed.
 * @throws AppError('invalidInput') with every problem in data.problems, and nothing stored; 'conflict' when it was confirmed before
 */
export async function confirmUpload(deps: Deps, input: ConfirmInput): Promise<ConfirmedDto> {
  const { actor, programmeId, id, idempotency } = input
  const staged = await ownStaged(deps, { programmeId, personId: actor.personId, id })
  // A repeated command is answered by its idempotency key, so a settled upload is refused inside the transaction only.
  const plan = staged.state === 'staged' && staged.expiresAt > deps.clock.now() ? await makePlan(deps, input, staged) : null
  try {
    return await unitOfWork(deps, { actor, name: 'confirmUpload', programmeId, idempotency }, async (work) => {
      if (!plan || !await settleStaged(work.trx, id, 'confirmed')) throw await settledError(deps, input, staged)
      const result = await storePlan(work, input, { staged, plan })
      const series = result.series.map(one => ({ id: one.id, agent: one.agentCode, lot: one.lot }))
      return { result, subject: `upload ${id}`, payload: { fileName: staged.fileName, sha256: hex(staged.sha256), kind: plan.kind.kind, series } }
    })
  }
  catch (error) {
    if (isDuplicate(error, 'staged')) throw await settledError(deps, input, staged)
    throw error
  }
}

async function makePlan(deps: Deps, { programmeId, draft }: ConfirmInput, staged: StagedRow): Promise<Plan> {
  const bytes = await stagedBytes(deps, staged)
  const kind = kindOf(deps, draft, bytes)
  const targets = await uploadTargets(deps.db, programmeId)
  const understood = await readUpload(deps, bytes, { programmeId, kind, draft, targets })
  if (understood.canStore) return { kind, understood, targets }
  const blocking = understood.problems.filter(problem => problem.severity === 'blocks')
  const [first] = blocking
  throw new AppError('invalidInput', first && blocking.length === 1 ? first.message : `${blocking.length} problems keep this file from being stored.`, {
    ...(first?.field ? { field: first.field } : {}), accepted: first?.accepted ?? 'a table with at least one series', data: { problems: understood.problems },
  })
}

async function storePlan(work: Work, { actor, programmeId, draft }: ConfirmInput, { staged, plan }: { staged: StagedRow, plan: Plan }): Promise<ConfirmedDto> {
  const { kind, understood, targets } = plan
  await insertUpload(work.trx, {
    id: staged.id, stagedId: staged.id, programmeId, sha256: staged.sha256, storageKey: staged.storageKey, bytes: staged.bytes, fileName: staged.fileName,
    uploadedBy: actor.personId, uploadedAt: work.now,
  })
  const { instrument, b0_T } = understood.conditions
  if (typeof instrument === 'string' && typeof b0_T === 'number') await addInstrument(work.trx, { id: work.id(), programmeId, name: instrument.slice(0, 120), b0_T, at: work.now })
  const mapping = canonicalJson(mappingOf(understood, draft))
  const series: ConfirmedDto['series'] = []
  for (const part of understood.series) {
    const target = targetOf(part, targets)
    const stored = await recordSeries(work, {
      programmeId, actor, kind, target, conditions: understood.conditions, mapping, uploadId: staged.id, replaces: null,
      tubes: part.tubes, request: { modelId: kind.defaultModel(understood.conditions), options: {}, exclusions: [], parentId: null }, reason: '',
    })
    series.push({ id: stored.seriesId, title: stored.title, agentCode: target.complexCode, lot: target.lot, jobId: stored.jobId })
  }
  return { uploadId: staged.id, series }
}

function targetOf({ complexCode, lot }: SeriesPart, targets: readonly UploadTarget[]): UploadTarget {
  const target = targets.find(one => one.complexCode === complexCode && one.lot === lot)
  if (!target) throw new Error(`A series of ${complexCode} ${lot} was planned without a batch.`)
  return target
}

/** How the file was read, for whoever asks later. Keys without a value are left out: canonical text has no undefined. */
function mappingOf({ delimiter, decimal, headerRow, layout, columns, found, workbook, encoding, tubeSheet }: Understood, draft: UploadDraft): unknown {
  const read = columns.map(({ index, header, stem, unit }) => ({ index, header, stem, unit }))
  const sheet = draft.tubeSheet === undefined ? tubeSheet : draft.tubeSheet
  return { delimiter, decimal, headerRow, layout, columns: read, found, encoding, sheet: workbook?.sheet ?? null, tubeSheet: sheet, draft: JSON.parse(JSON.stringify(draft)) as unknown }
}

async function settledError(deps: Deps, { actor, programmeId, id }: ConfirmInput, staged: StagedRow): Promise<AppError> {
  const upload = await findUpload(deps.db, { programmeId, id })
  if (upload) {
    return new AppError('conflict', `${upload.uploadedByName} stored this upload already, at ${upload.uploadedAt.toISOString()}.`, { data: { personName: upload.uploadedByName, at: upload.uploadedAt.toISOString() } })
  }
  refuseUnlessStaged(await ownStaged(deps, { programmeId, personId: actor.personId, id }), deps.clock.now())
  return new AppError('conflict', `Upload ${staged.fileName} is being stored by another request.`)
}

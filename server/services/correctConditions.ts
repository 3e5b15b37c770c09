import { AppError } from '../../shared/errors'
import { checkConditions, isAsked } from '../../shared/measurements/conditionsOf'
import type { Conditions, MeasurementKind, UploadProblem } from '../../shared/measurements/types'
import type { Actor } from '../../shared/permissions'
import type { CorrectRequest } from '../../shared/schemas/series'
import { canonicalJson } from '../../shared/science/canonical'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { hex } from '../platform/hashes'
import { fitExclusions, findFitById, fitVersions } from '../queries/fits'
import { insertSeriesEvent, type SeriesRow, seriesEvents, seriesTubes, type StoredTube } from '../queries/series'
import { inputHash } from './fitInput'
import { recordSeries } from './recordSeries'
import { openSeries } from './requestFit'
import { eventConflict } from './withdrawSeries'
import { unitOfWork, type Work } from './unitOfWork'

export interface CorrectInput { actor: Actor, programmeId: string, seriesId: string, request: CorrectRequest, idempotency?: { key: string, request: unknown } | undefined }

/**
 * Puts right what was typed beside a file. The old series stays as it was and is replaced by a new one with the same points, which is fitted afresh with the
 * same points left out; numbers of the old one no longer count, signed ones included, and decisions that rest on them are looked at again.
 */
export async function correctConditions(deps: Deps, { actor, programmeId, seriesId, request, idempotency }: CorrectInput): Promise<{ id: string, replaces: string, jobId: string }> {
  try {
    return await unitOfWork(deps, { actor, name: 'correctConditions', programmeId, idempotency }, async (work) => {
      const series = await openSeries(work.trx, programmeId, seriesId)
      const kind = deps.kinds[series.kind]
      if (!kind) throw new Error(`No measurement kind is called ${series.kind}.`)
      const corrected = correct(kind, { series, tubes: await seriesTubes(work.trx, programmeId, seriesId) }, request)
      const seq = ((await seriesEvents(work.trx, programmeId, seriesId)).at(-1)?.seq ?? 0) + 1
      await insertSeriesEvent(work.trx, { id: work.id(), programmeId, seriesId, seq, event: 'conditionsCorrected', reason: request.reason, personId: actor.personId, at: work.now })
      const stored = await recordSeries(work, {
        programmeId, actor, kind, target: { complexId: series.complexId, complexCode: series.agentCode, batchId: series.batchId, lot: series.lot }, ...corrected,
        mapping: canonicalJson(series.mapping), uploadId: series.uploadId, replaces: seriesId, request: await sameFit(work, programmeId, series, kind, corrected.conditions), reason: request.reason,
      })
      await work.enqueue({ kind: 'ground.notice', dedupeKey: `ground:corrected:${seriesId}`, payload: { programmeId, complexId: series.complexId, cause: `corrected:${seriesId}` }, maxAttempts: 5 })
      return {
        result: { id: stored.seriesId, replaces: seriesId, jobId: stored.jobId }, subject: `series ${stored.seriesId}`,
        payload: { replaces: seriesId, agent: series.agentCode, conditions: request.conditions, tubes: request.tubes, reason: request.reason, inputHashBefore: hex(series.inputHash) },
      }
    })
  }
  catch (error) {
    if (isDuplicate(error, 'step') || isDuplicate(error, 'successor')) throw await eventConflict(deps, programmeId, seriesId)
    throw error
  }
}

interface Measured { conditions: Conditions, tubes: StoredTube[] }

/** @throws AppError('invalidInput') when nothing would change, or the kind does not accept the result; data.problems has all of them */
function correct(kind: MeasurementKind, { series, tubes }: { series: SeriesRow, tubes: StoredTube[] }, request: CorrectRequest): Measured {
  const patched: Conditions = { ...series.conditions, ...request.conditions }
  const conditions = Object.fromEntries(Object.entries(patched).filter(([key, value]) => value !== null && value !== '' && (isAsked(kind, key, patched) || Object.hasOwn(request.conditions, key))))
  const numbers = tubes.map(tube => ({ ...tube, ...pick(request.tubes.find(one => one.tubeNo === tube.tubeNo)) }))
  const unknown = request.tubes.find(one => !tubes.some(tube => tube.tubeNo === one.tubeNo))
  if (unknown) throw new AppError('invalidInput', `The series has no tube ${unknown.tubeNo}.`, { field: 'tubes', accepted: `one of tubes ${tubes.map(tube => tube.tubeNo).join(', ')}` })
  const problems: UploadProblem[] = [...checkConditions(kind, conditions), ...kind.checkTubes(numbers, conditions)].filter(problem => problem.severity === 'blocks')
  const [first] = problems
  if (first) throw new AppError('invalidInput', first.message, { ...(first.field ? { field: first.field } : {}), accepted: first.accepted, data: { problems } })
  if (inputHash({ ...series, conditions, tubes: numbers }).equals(series.inputHash)) {
    throw new AppError('invalidInput', 'Nothing differs from what is stored.', { accepted: 'at least one condition or concentration that differs' })
  }
  return { conditions, tubes: numbers }
}

const pick = (one: { conc_mM: number, concSe_mM: number | null } | undefined) => one ? { conc_mM: one.conc_mM, concSe_mM: one.concSe_mM } : {}

/** The newest fit again: its options and what it leaves out, each exclusion still with whoever said so. A model that no longer suits the conditions gives way. */
async function sameFit(work: Work, programmeId: string, series: SeriesRow, kind: MeasurementKind, conditions: Conditions) {
  const [newest] = await fitVersions(work.trx, programmeId, series.id)
  const modelId = kind.defaultModel(conditions)
  if (!newest) return { modelId, options: {}, exclusions: [], parentId: null }
  const fit = await findFitById(work.trx, programmeId, newest.id)
  const exclusions = await fitExclusions(work.trx, programmeId, newest.id)
  const wasChosen = newest.modelId !== kind.defaultModel(series.conditions)
  return { modelId: wasChosen ? newest.modelId : modelId, options: JSON.parse(fit!.options) as Record<string, number | string | boolean>, exclusions, parentId: newest.id }
}

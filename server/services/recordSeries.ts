import type { Conditions, MeasurementKind, SeriesTube } from '../../shared/measurements/types'
import type { Actor } from '../../shared/permissions'
import { canonicalJson } from '../../shared/science/canonical'
import { insertSeries, insertSeriesEvent, insertTubes } from '../queries/series'
import type { UploadTarget } from '../queries/uploadTargets'
import { inputHash } from './fitInput'
import { type FitOrder, orderFit } from './orderFit'
import type { Work } from './unitOfWork'

export interface SeriesToRecord {
  programmeId: string
  actor: Actor
  kind: MeasurementKind
  target: UploadTarget
  conditions: Conditions
  /** Canonical JSON text. */
  mapping: string
  uploadId: string
  /** The series that this one corrects; null = a new one. */
  replaces: string | null
  tubes: readonly (SeriesTube & { place: string })[]
  request: Omit<FitOrder, 'seriesId' | 'requestedBy'>
  reason: string
}

/** Writes a series with its tubes and its first event, and orders its fit, inside a transaction. */
export async function recordSeries(work: Work, input: SeriesToRecord): Promise<{ seriesId: string, title: string, jobId: string }> {
  const { programmeId, actor, kind, target, conditions, tubes } = input
  const seriesId = work.id()
  const title = kind.describe(conditions).slice(0, 200)
  await insertSeries(work.trx, {
    id: seriesId, programmeId, kind: kind.kind, kindVersion: kind.version, title, complexId: target.complexId, batchId: target.batchId, uploadId: input.uploadId,
    conditions: canonicalJson(conditions), mapping: input.mapping, inputHash: inputHash({ kind: kind.kind, kindVersion: kind.version, conditions, tubes }),
    replaces: input.replaces, createdBy: actor.personId, at: work.now,
  })
  await insertTubes(work.trx, { programmeId, seriesId, tubes: tubes.map(tube => ({ id: work.id(), tube, place: tube.place })) })
  await insertSeriesEvent(work.trx, { id: work.id(), programmeId, seriesId, seq: 1, event: 'recorded', reason: input.reason, personId: actor.personId, at: work.now })
  const jobId = await orderFit(work, { ...input.request, seriesId, requestedBy: actor.personId })
  return { seriesId, title, jobId }
}

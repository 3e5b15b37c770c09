import { AppError } from '../../shared/errors'
import { findOptionProblem } from '../../shared/measurements/fitOptions'
import type { Actor } from '../../shared/permissions'
import type { FitRequest, FitRequested } from '../../shared/schemas/fit'
import type { Knex } from 'knex'
import type { Deps } from '../platform/deps'
import { findFit, fitExclusions, type FitRow, fitVersions, type StoredExclusion } from '../queries/fits'
import { findSeries, type SeriesRow, seriesTubes, type StoredTube } from '../queries/series'
import { orderFit } from './orderFit'
import { unitOfWork } from './unitOfWork'

export const SERIES_NOT_FOUND = 'There is no such series, or it is not open to you.'

export interface RequestFitInput { actor: Actor, programmeId: string, seriesId: string, request: FitRequest, idempotency?: { key: string, request: unknown } | undefined }

/**
 * Orders the next version of a fit. What its parent leaves out stays out unless it is put back by name; every new exclusion carries its reason and whose it is.
 * Nothing that is stored changes: the new version names its parent.
 */
export async function requestFit(deps: Deps, { actor, programmeId, seriesId, request, idempotency }: RequestFitInput): Promise<FitRequested> {
  return unitOfWork(deps, { actor, name: 'requestFit', programmeId, idempotency }, async (work) => {
    const series = await openSeries(work.trx, programmeId, seriesId)
    const kind = deps.kinds[series.kind]
    if (!kind) throw new Error(`No measurement kind is called ${series.kind}.`)
    const parent = await parentFit(work.trx, programmeId, seriesId, request.parentVersion)
    const modelId = request.modelId ?? parent?.modelId ?? kind.defaultModel(series.conditions)
    if (!kind.models.some(model => model.id === modelId)) {
      throw new AppError('invalidInput', `No model is called ${modelId}.`, { field: 'modelId', accepted: kind.models.map(model => model.id).join(', ') })
    }
    const problem = findOptionProblem(kind.options ?? [], modelId, request.options)
    if (problem) throw new AppError('invalidInput', problem.message, { field: `options.${problem.key}`, accepted: problem.accepted })
    const inherited = parent ? await fitExclusions(work.trx, programmeId, parent.id) : []
    const tubes = await seriesTubes(work.trx, programmeId, seriesId)
    const exclusions = mergeExclusions(inherited, request, { tubes, personId: actor.personId, at: work.now })
    const jobId = await orderFit(work, { seriesId, requestedBy: actor.personId, modelId, options: request.options, exclusions, parentId: parent?.id ?? null })
    return {
      result: { jobId, seriesId }, subject: `series ${seriesId}`,
      payload: { modelId, options: request.options, parentVersion: parent?.versionNo ?? null, leftOut: request.exclusions, putBack: request.putBack },
    }
  })
}

/** A series to which something may still be done. @throws AppError('notFound') or, when it was withdrawn or corrected, AppError('conflict') */
export async function openSeries(db: Knex, programmeId: string, seriesId: string): Promise<SeriesRow> {
  const series = await findSeries(db, programmeId, seriesId, 'programme')
  if (!series) throw new AppError('notFound', SERIES_NOT_FOUND)
  if (series.isWithdrawn) throw new AppError('conflict', 'This series was withdrawn; nothing more is done with it.', { data: { state: 'withdrawn' } })
  if (series.replacedBy) throw new AppError('conflict', 'The conditions of this series were corrected; the corrected series takes its place.', { data: { replacedBy: series.replacedBy } })
  return series
}

async function parentFit(db: Knex, programmeId: string, seriesId: string, versionNo: number | null): Promise<FitRow | null> {
  const wanted = versionNo ?? (await fitVersions(db, programmeId, seriesId))[0]?.versionNo
  if (wanted === undefined) return null
  const fit = await findFit(db, programmeId, seriesId, wanted)
  if (!fit) throw new AppError('invalidInput', `This series has no version ${wanted}.`, { field: 'parentVersion', accepted: 'a version that exists' })
  return fit
}

interface Now { tubes: readonly StoredTube[], personId: string, at: Date }
type Place = Pick<StoredExclusion, 'tubeNo' | 'pointIndex'>

const samePlace = (a: Place) => (b: Place): boolean => a.tubeNo === b.tubeNo && a.pointIndex === b.pointIndex

function mergeExclusions(inherited: readonly StoredExclusion[], request: FitRequest, { tubes, personId, at }: Now): StoredExclusion[] {
  request.putBack.forEach((place, i) => {
    if (!inherited.some(samePlace(place))) throw new AppError('invalidInput', `${words(place)} is not left out, so it cannot be put back.`, { field: `putBack.${i}`, accepted: 'a point or tube that the parent version leaves out' })
  })
  const kept = inherited.filter(one => !request.putBack.some(samePlace(one)))
  const merged = [...kept]
  request.exclusions.forEach((one, i) => {
    const field = `exclusions.${i}`
    const tube = tubes.find(candidate => candidate.tubeNo === one.tubeNo)
    if (!tube) throw new AppError('invalidInput', `The series has no tube ${one.tubeNo}.`, { field, accepted: `one of tubes ${tubes.map(each => each.tubeNo).join(', ')}` })
    if (one.pointIndex !== null && one.pointIndex >= tube.points.rows.length) {
      throw new AppError('invalidInput', `Tube ${one.tubeNo} has ${tube.points.rows.length} points; there is no point ${one.pointIndex + 1}.`, { field, accepted: `a point from 0 to ${tube.points.rows.length - 1}` })
    }
    if (merged.some(samePlace(one))) throw new AppError('invalidInput', `${words(one)} is left out already.`, { field, accepted: 'each point or tube once' })
    merged.push({ ...one, personId, at })
  })
  return merged
}

const words = ({ tubeNo, pointIndex }: Place): string => pointIndex === null ? `Tube ${tubeNo}` : `Point ${pointIndex + 1} of tube ${tubeNo}`

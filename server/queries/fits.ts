import type { Knex } from 'knex'
import type { CheckState } from '../../shared/checks/transitions'
import type { Exclusion } from '../../shared/measurements/types'
import { fromBinary, fromBinaryOrNull, toBinary, toBinaryOrNull } from '../platform/ids'

export interface NewFit {
  id: string
  programmeId: string
  seriesId: string
  versionNo: number
  parentId: string | null
  jobId: string
  modelId: string
  modelVersion: number
  /** Canonical JSON text, as are engine and result. */
  options: string
  exclusionsHash: Buffer
  seed: string
  inputHash: Buffer
  engine: string
  outcome: 'ok' | 'refused'
  result: string
  resultHash: Buffer
  requestedBy: string
  at: Date
}

export async function insertFit(trx: Knex, fit: NewFit): Promise<void> {
  await trx('fit').insert({
    id: toBinary(fit.id), programme_id: toBinary(fit.programmeId), series_id: toBinary(fit.seriesId), version_no: fit.versionNo, parent_id: toBinaryOrNull(fit.parentId),
    job_id: toBinary(fit.jobId), model_id: fit.modelId, model_version: fit.modelVersion, options: fit.options, exclusions_hash: fit.exclusionsHash, seed: fit.seed,
    input_hash: fit.inputHash, engine: fit.engine, outcome: fit.outcome, result: fit.result, result_hash: fit.resultHash, requested_by: toBinary(fit.requestedBy), created_at: fit.at,
  })
}

/** What a fit rests on: every tube with the hash of its points, in one statement. */
export async function insertFitInputs(trx: Knex, { programmeId, fitId, tubes }: { programmeId: string, fitId: string, tubes: readonly { id: string, pointsHash: Buffer }[] }): Promise<void> {
  if (tubes.length === 0) return
  await trx('fit_input').insert(tubes.map(tube => ({ programme_id: toBinary(programmeId), fit_id: toBinary(fitId), tube_id: toBinary(tube.id), points_hash: tube.pointsHash })))
}

/** A point or tube left out, with who said so and when. */
export interface StoredExclusion extends Exclusion { personId: string, at: Date }

export async function insertExclusion(trx: Knex, row: StoredExclusion & { id: string, programmeId: string, fitId: string }): Promise<void> {
  await trx('exclusion').insert({
    id: toBinary(row.id), programme_id: toBinary(row.programmeId), fit_id: toBinary(row.fitId), tube_no: row.tubeNo, point_index: row.pointIndex, reason: row.reason,
    person_id: toBinary(row.personId), at: row.at,
  })
}

export async function fitExclusions(db: Knex, programmeId: string, fitId: string): Promise<(StoredExclusion & { personName: string })[]> {
  const rows = await db('exclusion as e').join('person as p', 'p.id', 'e.person_id').where({ 'e.programme_id': toBinary(programmeId), 'e.fit_id': toBinary(fitId) })
    .orderBy('e.tube_no').orderBy('e.point_index').select('e.tube_no', 'e.point_index', 'e.reason', 'e.person_id', 'e.at', 'p.name as person_name') as
    { tube_no: number, point_index: number | null, reason: string, person_id: Buffer, at: Date, person_name: string }[]
  return rows.map(row => ({ tubeNo: row.tube_no, pointIndex: row.point_index, reason: row.reason, personId: fromBinary(row.person_id), at: row.at, personName: row.person_name }))
}

/** The number that the next version of a series takes; UNIQUE(series, version) settles who gets it. */
export async function nextVersionNo(trx: Knex, seriesId: string): Promise<number> {
  const row = await trx('fit').where({ series_id: toBinary(seriesId) }).max({ n: 'version_no' }).first() as { n: number | null }
  return (row.n ?? 0) + 1
}

export async function fitOfJob(db: Knex, jobId: string): Promise<string | null> {
  const row = await db('fit').where({ job_id: toBinary(jobId) }).first('id') as { id: Buffer } | undefined
  return row ? fromBinary(row.id) : null
}

export type CheckWord = CheckState

export interface FitVersionRow {
  id: string
  seriesId: string
  versionNo: number
  parentId: string | null
  modelId: string
  modelVersion: number
  outcome: 'ok' | 'refused'
  requestedBy: string
  requestedByName: string
  createdAt: Date
  check: { state: CheckWord, seq: number, personName: string | null, since: Date | null }
  nExclusions: number
}

export interface FitRow extends FitVersionRow {
  options: string
  exclusionsHash: Buffer
  seed: string
  inputHash: Buffer
  engine: string
  result: string
  resultHash: Buffer
}

interface RawVersion {
  id: Buffer, series_id: Buffer, version_no: number, parent_id: Buffer | null, model_id: string, model_version: number, outcome: 'ok' | 'refused', requested_by: Buffer, requester: string, created_at: Date
  check_state: CheckWord | null, check_seq: number | null, checker: string | null, since: Date | null, n_exclusions: number
}
interface RawFit extends RawVersion { options: string, exclusions_hash: Buffer, seed: string, input_hash: Buffer, engine: string, result: string, result_hash: Buffer }

const VERSION_COLUMNS = ['f.id', 'f.series_id', 'f.version_no', 'f.parent_id', 'f.model_id', 'f.model_version', 'f.outcome', 'f.requested_by', 'f.created_at', 'p.name as requester',
  'c.state as check_state', 'c.seq as check_seq', 'cp.name as checker', 'c.since']
const RESULT_COLUMNS = ['f.options', 'f.exclusions_hash', 'f.seed', 'f.input_hash', 'f.engine', 'f.result', 'f.result_hash']

const fitsWithCheck = (db: Knex, programmeId: string) => db('fit as f').join('person as p', 'p.id', 'f.requested_by').leftJoin('check_current as c', 'c.subject_id', 'f.id')
  .leftJoin('person as cp', 'cp.id', 'c.person_id').where('f.programme_id', toBinary(programmeId))
const leftOut = (db: Knex) => db.raw('(SELECT COUNT(*) FROM exclusion e WHERE e.fit_id = f.id) AS n_exclusions')

/** Versions of a series, newest first, without their results; in 'signed' scope the signed ones. */
export async function fitVersions(db: Knex, programmeId: string, seriesId: string, { signedOnly = false } = {}): Promise<FitVersionRow[]> {
  const rows = await fitsWithCheck(db, programmeId).where('f.series_id', toBinary(seriesId)).modify((query) => { if (signedOnly) void query.where('c.state', 'signed') })
    .orderBy('f.version_no', 'desc').select(...VERSION_COLUMNS, leftOut(db)) as RawVersion[]
  return rows.map(toVersion)
}

export async function findFit(db: Knex, programmeId: string, seriesId: string, versionNo: number): Promise<FitRow | null> {
  const row = await fitsWithCheck(db, programmeId).where({ 'f.series_id': toBinary(seriesId), 'f.version_no': versionNo }).first(...VERSION_COLUMNS, ...RESULT_COLUMNS, leftOut(db)) as RawFit | undefined
  return row ? toFit(row) : null
}

export async function findFitById(db: Knex, programmeId: string, fitId: string): Promise<FitRow | null> {
  const row = await fitsWithCheck(db, programmeId).where('f.id', toBinary(fitId)).first(...VERSION_COLUMNS, ...RESULT_COLUMNS, leftOut(db)) as RawFit | undefined
  return row ? toFit(row) : null
}

/** Evidence that one fit emitted. */
export async function evidenceIdsOfFit(db: Knex, programmeId: string, fitId: string): Promise<{ id: string, quantity: string }[]> {
  const rows = await db('evidence').where({ programme_id: toBinary(programmeId), fit_id: toBinary(fitId) }).orderBy('id').select('id', 'quantity') as { id: Buffer, quantity: string }[]
  return rows.map(row => ({ id: fromBinary(row.id), quantity: row.quantity }))
}

/** Locks the checks of every fit of a series. @returns the version that is signed, with who signed it */
export async function lockSignedFit(trx: Knex.Transaction, programmeId: string, seriesId: string): Promise<{ versionNo: number, personName: string, at: Date } | null> {
  const fits = await trx('fit').where({ programme_id: toBinary(programmeId), series_id: toBinary(seriesId) }).select('id', 'version_no') as { id: Buffer, version_no: number }[]
  if (fits.length === 0) return null
  const checks = await trx('check_current').whereIn('subject_id', fits.map(fit => fit.id)).forUpdate().select('subject_id', 'state', 'person_id', 'since') as { subject_id: Buffer, state: CheckWord, person_id: Buffer, since: Date }[]
  const signed = checks.find(check => check.state === 'signed')
  if (!signed) return null
  const person = await trx('person').where({ id: signed.person_id }).first('name') as { name: string }
  return { versionNo: fits.find(fit => fit.id.equals(signed.subject_id))!.version_no, personName: person.name, at: signed.since }
}

const toVersion = (row: RawVersion): FitVersionRow => ({
  id: fromBinary(row.id), seriesId: fromBinary(row.series_id), versionNo: row.version_no, parentId: fromBinaryOrNull(row.parent_id), modelId: row.model_id, modelVersion: row.model_version,
  outcome: row.outcome, requestedBy: fromBinary(row.requested_by), requestedByName: row.requester, createdAt: row.created_at, nExclusions: Number(row.n_exclusions),
  check: { state: row.check_state ?? 'draft', seq: row.check_seq ?? 0, personName: row.checker, since: row.since },
})

const toFit = (row: RawFit): FitRow => ({
  ...toVersion(row), options: row.options, exclusionsHash: row.exclusions_hash, seed: row.seed, inputHash: row.input_hash, engine: row.engine, result: row.result, resultHash: row.result_hash,
})

import type { Knex } from 'knex'
import type { Conditions } from '../../shared/measurements/types'
import { hex } from '../platform/hashes'
import { fromBinary, toBinary } from '../platform/ids'
import { WITHDRAWN } from './series'

export interface FitTrace {
  fitId: string
  versionNo: number
  modelId: string
  modelVersion: number
  engine: { lanthorn: string, node: string, v8: string }
  seed: string
  resultHash: string
  inputHash: string
  fittedAt: Date
  fittedBy: string
  exclusions: number
  seriesId: string
  seriesTitle: string
  kind: string
  conditions: Conditions
  recordedBy: string
  recordedAt: Date
  /** Why its numbers count no longer; null = they do. */
  gone: 'withdrawn' | 'replaced' | null
  tubes: number
  points: number
  uploadId: string
  fileName: string
  fileBytes: number
  fileSha256: string
  uploadedBy: string
  uploadedAt: Date
}

interface FitRaw {
  fit_id: Buffer, version_no: number, model_id: string, model_version: number, engine: string, seed: string, result_hash: Buffer, input_hash: Buffer, fitted_at: Date, fitted_by: string, exclusions: number
  series_id: Buffer, title: string, kind: string, conditions: string, recorded_by: string, recorded_at: Date, withdrawn: number, replaced: number, tubes: number, points: number
  upload_id: Buffer, file_name: string, bytes: number, sha256: Buffer, uploaded_by: string, uploaded_at: Date
}

/** A fit version with its series and its file, down to the hash of the bytes that came in. */
export async function traceFit(db: Knex, programmeId: string, fitId: string): Promise<FitTrace | null> {
  const row = await db('fit as f').join('series as s', 's.id', 'f.series_id').join('upload as u', 'u.id', 's.upload_id')
    .join('person as fp', 'fp.id', 'f.requested_by').join('person as sp', 'sp.id', 's.created_by').join('person as up', 'up.id', 'u.uploaded_by')
    .where('f.programme_id', toBinary(programmeId)).where('f.id', toBinary(fitId))
    .first('f.id as fit_id', 'f.version_no', 'f.model_id', 'f.model_version', 'f.engine', 'f.seed', 'f.result_hash', 'f.input_hash', 'f.created_at as fitted_at', 'fp.name as fitted_by',
      db.raw('(SELECT COUNT(*) FROM exclusion x WHERE x.fit_id = f.id) AS exclusions'),
      's.id as series_id', 's.title', 's.kind', 's.conditions', 'sp.name as recorded_by', 's.created_at as recorded_at',
      db.raw(`EXISTS (${WITHDRAWN}) AS withdrawn`), db.raw('EXISTS (SELECT 1 FROM series n WHERE n.replaces = s.id) AS replaced'),
      db.raw('(SELECT COUNT(*) FROM tube t WHERE t.series_id = s.id) AS tubes'), db.raw('(SELECT SUM(t.n_points) FROM tube t WHERE t.series_id = s.id) AS points'),
      'u.id as upload_id', 'u.file_name', 'u.bytes', 'u.sha256', 'up.name as uploaded_by', 'u.uploaded_at') as FitRaw | undefined
  if (!row) return null
  return {
    fitId: fromBinary(row.fit_id), versionNo: row.version_no, modelId: row.model_id, modelVersion: row.model_version, engine: JSON.parse(row.engine) as FitTrace['engine'], seed: row.seed,
    resultHash: hex(row.result_hash), inputHash: hex(row.input_hash), fittedAt: row.fitted_at, fittedBy: row.fitted_by, exclusions: Number(row.exclusions),
    seriesId: fromBinary(row.series_id), seriesTitle: row.title, kind: row.kind, conditions: JSON.parse(row.conditions) as Conditions, recordedBy: row.recorded_by, recordedAt: row.recorded_at,
    gone: row.withdrawn ? 'withdrawn' : row.replaced ? 'replaced' : null,
    tubes: Number(row.tubes), points: Number(row.points ?? 0), uploadId: fromBinary(row.upload_id), fileName: row.file_name, fileBytes: row.bytes, fileSha256: hex(row.sha256),
    uploadedBy: row.uploaded_by, uploadedAt: row.uploaded_at,
  }
}

export interface RecordTrace { recordId: string, kind: string, versionNo: number, payloadHash: string, enteredBy: string, enteredAt: Date, citation: string, doi: string | null, origin: 'paper' | 'memory' | 'own', conditions: Conditions }
interface RecordRaw { id: Buffer, kind: string, version_no: number, payload_hash: Buffer, entered_by: string, entered_at: Date, citation: string, doi: string | null, origin: RecordTrace['origin'], conditions: string }

/** A typed record with its source. */
export async function traceRecord(db: Knex, programmeId: string, recordId: string): Promise<RecordTrace | null> {
  const row = await db('record as r').join('person as p', 'p.id', 'r.created_by').join('source as s', 's.id', 'r.source_id')
    .where('r.programme_id', toBinary(programmeId)).where('r.id', toBinary(recordId))
    .first('r.id', 'r.kind', 'r.version_no', 'r.payload_hash', 'p.name as entered_by', 'r.created_at as entered_at', 's.citation', 's.doi', 's.origin', 'r.conditions') as RecordRaw | undefined
  return row
    ? { recordId: fromBinary(row.id), kind: row.kind, versionNo: row.version_no, payloadHash: hex(row.payload_hash), enteredBy: row.entered_by, enteredAt: row.entered_at, citation: row.citation, doi: row.doi, origin: row.origin, conditions: JSON.parse(row.conditions) as Conditions }
    : null
}

export interface BatchTrace { lot: string, versionNo: number, payloadHash: string, enteredBy: string, enteredAt: Date }
interface BatchRaw { lot: string, version_no: number, payload_hash: Buffer, entered_by: string, entered_at: Date }

export async function traceBatch(db: Knex, programmeId: string, batchVersionId: string): Promise<BatchTrace | null> {
  const row = await db('batch_version as v').join('batch as b', 'b.id', 'v.batch_id').join('person as p', 'p.id', 'v.created_by')
    .where('v.programme_id', toBinary(programmeId)).where('v.id', toBinary(batchVersionId))
    .first('b.lot', 'v.version_no', 'v.payload_hash', 'p.name as entered_by', 'v.created_at as entered_at') as BatchRaw | undefined
  return row ? { lot: row.lot, versionNo: row.version_no, payloadHash: hex(row.payload_hash), enteredBy: row.entered_by, enteredAt: row.entered_at } : null
}

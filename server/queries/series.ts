import type { Knex } from 'knex'
import type { Conditions, PointTable, SeriesTube } from '../../shared/measurements/types'
import type { Scope } from '../../shared/permissions'
import { sealed } from '../platform/hashes'
import { fromBinary, fromBinaryOrNull, toBinary, toBinaryOrNull } from '../platform/ids'

export interface NewSeries {
  id: string
  programmeId: string
  kind: string
  kindVersion: number
  title: string
  complexId: string
  batchId: string
  uploadId: string
  /** Canonical JSON text. */
  conditions: string
  mapping: string
  inputHash: Buffer
  replaces: string | null
  createdBy: string
  at: Date
}

export async function insertSeries(trx: Knex, row: NewSeries): Promise<void> {
  await trx('series').insert({
    id: toBinary(row.id), programme_id: toBinary(row.programmeId), kind: row.kind, kind_version: row.kindVersion, title: row.title, complex_id: toBinary(row.complexId),
    batch_id: toBinary(row.batchId), upload_id: toBinary(row.uploadId), conditions: row.conditions, mapping: row.mapping, input_hash: row.inputHash,
    replaces: toBinaryOrNull(row.replaces), created_by: toBinary(row.createdBy), created_at: row.at,
  })
}

export interface StoredTube extends SeriesTube {
  id: string
  /** Where in the file its points stand. */
  place: string
  pointsHash: Buffer
}

/**
 * What is sealed of a tube: its points and, because DOUBLE columns do not read back exactly, its concentration. The columns beside it only filter and sort.
 */
export const sealedTube = (tube: Pick<SeriesTube, 'points' | 'conc_mM' | 'concSe_mM'>) =>
  sealed({ columns: tube.points.columns, rows: tube.points.rows, conc_mM: tube.conc_mM, concSe_mM: tube.concSe_mM })

/** All tubes of a series in one statement: a phantom can have a hundred. */
export async function insertTubes(trx: Knex, { programmeId, seriesId, tubes }: { programmeId: string, seriesId: string, tubes: readonly { id: string, tube: SeriesTube, place: string }[] }): Promise<void> {
  if (tubes.length === 0) return
  await trx('tube').insert(tubes.map(({ id, tube, place }) => {
    const { text, hash } = sealedTube(tube)
    return {
      id: toBinary(id), programme_id: toBinary(programmeId), series_id: toBinary(seriesId), tube_no: tube.tubeNo, label: tube.label, role: tube.role,
      conc_mM: tube.conc_mM, conc_se_mM: tube.concSe_mM, place: place.slice(0, 200), n_points: tube.points.rows.length, points: text, points_hash: hash,
    }
  }))
}

interface RawTube { id: Buffer, tube_no: number, label: string, role: SeriesTube['role'], place: string, points: string, points_hash: Buffer }

/** Tubes of a series with their points, exactly as they were stored. */
export async function seriesTubes(db: Knex, programmeId: string, seriesId: string): Promise<StoredTube[]> {
  const rows = await db('tube').where({ programme_id: toBinary(programmeId), series_id: toBinary(seriesId) }).orderBy('tube_no')
    .select('id', 'tube_no', 'label', 'role', 'place', 'points', 'points_hash') as RawTube[]
  return rows.map((row) => {
    const { columns, rows: points, conc_mM, concSe_mM } = JSON.parse(row.points) as PointTable & { conc_mM: number, concSe_mM: number | null }
    return { id: fromBinary(row.id), tubeNo: row.tube_no, label: row.label, role: row.role, place: row.place, pointsHash: row.points_hash, conc_mM, concSe_mM, points: { columns, rows: points } }
  })
}

/** Where in the file each tube stands, by its number. */
export async function tubePlaces(db: Knex, programmeId: string, seriesId: string): Promise<Map<number, string>> {
  const rows = await db('tube').where({ programme_id: toBinary(programmeId), series_id: toBinary(seriesId) }).select('tube_no', 'place') as { tube_no: number, place: string }[]
  return new Map(rows.map(row => [row.tube_no, row.place]))
}

export type SeriesEventName = 'recorded' | 'withdrawn' | 'conditionsCorrected'

export async function insertSeriesEvent(trx: Knex, row: { id: string, programmeId: string, seriesId: string, seq: number, event: SeriesEventName, reason: string, personId: string, at: Date }): Promise<void> {
  await trx('series_event').insert({
    id: toBinary(row.id), programme_id: toBinary(row.programmeId), series_id: toBinary(row.seriesId), seq: row.seq, event: row.event, reason: row.reason,
    person_id: toBinary(row.personId), at: row.at,
  })
}

export interface SeriesEvent { seq: number, event: SeriesEventName, reason: string, personId: string, personName: string, at: Date }

export async function seriesEvents(db: Knex, programmeId: string, seriesId: string): Promise<SeriesEvent[]> {
  const rows = await db('series_event as e').join('person as p', 'p.id', 'e.person_id').where({ 'e.programme_id': toBinary(programmeId), 'e.series_id': toBinary(seriesId) }).orderBy('e.seq')
    .select('e.seq', 'e.event', 'e.reason', 'e.person_id', 'e.at', 'p.name as person_name') as { seq: number, event: SeriesEventName, reason: string, person_id: Buffer, at: Date, person_name: string }[]
  return rows.map(row => ({ seq: row.seq, event: row.event, reason: row.reason, personId: fromBinary(row.person_id), personName: row.person_name, at: row.at }))
}

export interface SeriesRow {
  id: string
  kind: string
  kindVersion: number
  title: string
  complexId: string
  agentCode: string
  batchId: string
  lot: string
  uploadId: string
  fileName: string
  sha256: Buffer
  fileBytes: number
  uploadedByName: string
  uploadedAt: Date
  conditions: Conditions
  mapping: unknown
  inputHash: Buffer
  replaces: string | null
  replacedBy: string | null
  isWithdrawn: boolean
  createdBy: string
  createdByName: string
  createdAt: Date
}

interface RawSeries {
  id: Buffer, kind: string, kind_version: number, title: string, complex_id: Buffer, code: string, batch_id: Buffer, lot: string, upload_id: Buffer, file_name: string, sha256: Buffer, bytes: number
  uploader: string, uploaded_at: Date, conditions: string, mapping: string, input_hash: Buffer, replaces: Buffer | null, replaced_by: Buffer | null, withdrawn: number
  created_by: Buffer, creator: string, created_at: Date
}

/** One series; in 'signed' scope only where a fit of it is signed. null = there is none for this person. */
export async function findSeries(db: Knex, programmeId: string, id: string, scope: Scope): Promise<SeriesRow | null> {
  const row = await db('series as s').join('complex as x', 'x.id', 's.complex_id').join('batch as b', 'b.id', 's.batch_id').join('upload as u', 'u.id', 's.upload_id')
    .join('person as up', 'up.id', 'u.uploaded_by').join('person as cp', 'cp.id', 's.created_by').leftJoin('series as r', 'r.replaces', 's.id')
    .where({ 's.id': toBinary(id), 's.programme_id': toBinary(programmeId) })
    .modify((query) => { if (scope === 'signed') void query.whereExists(signedFits(db)) })
    .first('s.*', 'x.code', 'b.lot', 'u.file_name', 'u.sha256', 'u.bytes', 'u.uploaded_at', 'up.name as uploader', 'cp.name as creator', 'r.id as replaced_by',
      db.raw(`EXISTS (${WITHDRAWN}) AS withdrawn`)) as RawSeries | undefined
  return row ? toSeries(row) : null
}

export const WITHDRAWN = `SELECT 1 FROM series_event w WHERE w.series_id = s.id AND w.event = 'withdrawn'`

/** Signed fits of the series `s` of an outer query; a withdrawn or replaced series has none that count. */
export const signedFits = (db: Knex) => db('fit as sf').join('check_current as sc', 'sc.subject_id', 'sf.id').whereRaw('sf.series_id = s.id').where('sc.state', 'signed')
  .whereRaw(`NOT EXISTS (${WITHDRAWN})`).whereRaw('NOT EXISTS (SELECT 1 FROM series n WHERE n.replaces = s.id)').select(db.raw('1'))

const toSeries = (row: RawSeries): SeriesRow => ({
  id: fromBinary(row.id), kind: row.kind, kindVersion: row.kind_version, title: row.title, complexId: fromBinary(row.complex_id), agentCode: row.code, batchId: fromBinary(row.batch_id),
  lot: row.lot, uploadId: fromBinary(row.upload_id), fileName: row.file_name, sha256: row.sha256, fileBytes: row.bytes, uploadedByName: row.uploader, uploadedAt: row.uploaded_at,
  conditions: JSON.parse(row.conditions) as Conditions, mapping: JSON.parse(row.mapping), inputHash: row.input_hash, replaces: fromBinaryOrNull(row.replaces),
  replacedBy: fromBinaryOrNull(row.replaced_by), isWithdrawn: Boolean(row.withdrawn), createdBy: fromBinary(row.created_by), createdByName: row.creator, createdAt: row.created_at,
})

/** Conditions of the newest series of a kind, which a new upload may start from. */
export async function lastConditions(db: Knex, programmeId: string, kind: string): Promise<{ seriesId: string, title: string, conditions: Conditions, at: Date } | null> {
  const row = await db('series').where({ programme_id: toBinary(programmeId), kind }).orderBy('created_at', 'desc').orderBy('id', 'desc')
    .first('id', 'title', 'conditions', 'created_at') as { id: Buffer, title: string, conditions: string, created_at: Date } | undefined
  return row ? { seriesId: fromBinary(row.id), title: row.title, conditions: JSON.parse(row.conditions) as Conditions, at: row.created_at } : null
}

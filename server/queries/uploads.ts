import type { Knex } from 'knex'
import { fromBinary, toBinary } from '../platform/ids'
import { hex } from '../platform/hashes'

export type StagedState = 'staged' | 'confirmed' | 'discarded' | 'expired'

export interface StagedRow {
  id: string
  programmeId: string
  personId: string
  fileName: string
  bytes: number
  sha256: Buffer
  storageKey: string
  state: StagedState
  /** What the person chose so far; JSON text of an UploadDraft. */
  draft: string
  createdAt: Date
  expiresAt: Date
}

interface RawStaged {
  id: Buffer, programme_id: Buffer, person_id: Buffer, file_name: string, bytes: number, sha256: Buffer, storage_key: string
  state: StagedState, draft: string, created_at: Date, expires_at: Date
}

const toStaged = (row: RawStaged): StagedRow => ({
  id: fromBinary(row.id), programmeId: fromBinary(row.programme_id), personId: fromBinary(row.person_id), fileName: row.file_name, bytes: row.bytes, sha256: row.sha256,
  storageKey: row.storage_key, state: row.state, draft: row.draft, createdAt: row.created_at, expiresAt: row.expires_at,
})

export async function insertStaged(trx: Knex, row: Omit<StagedRow, 'state'>): Promise<void> {
  await trx('upload_staged').insert({
    id: toBinary(row.id), programme_id: toBinary(row.programmeId), person_id: toBinary(row.personId), file_name: row.fileName, bytes: row.bytes, sha256: row.sha256,
    storage_key: row.storageKey, draft: row.draft, created_at: row.createdAt, expires_at: row.expiresAt,
  })
}

/** A staged upload is its owner's alone: to everybody else it is not there. */
export async function findStaged(db: Knex, { programmeId, personId, id }: { programmeId: string, personId: string, id: string }): Promise<StagedRow | null> {
  const row = await db('upload_staged').where({ id: toBinary(id), programme_id: toBinary(programmeId), person_id: toBinary(personId) }).first('*') as RawStaged | undefined
  return row ? toStaged(row) : null
}

/** @returns false when the upload is no longer staged */
export async function saveDraft(db: Knex, id: string, draft: string): Promise<boolean> {
  await db('upload_staged').where({ id: toBinary(id), state: 'staged' }).update({ draft })
  return Boolean(await db('upload_staged').where({ id: toBinary(id), state: 'staged' }).first('id'))
}

/** Ends a staged upload. @returns false when somebody else ended it first */
export async function settleStaged(trx: Knex, id: string, state: Exclude<StagedState, 'staged'>): Promise<boolean> {
  return await trx('upload_staged').where({ id: toBinary(id), state: 'staged' }).update({ state }) === 1
}

/** A person's staged uploads that are neither stored nor given up, newest first. */
export async function openStaged(db: Knex, { programmeId, personId, now }: { programmeId: string, personId: string, now: Date }): Promise<StagedRow[]> {
  const rows = await db('upload_staged').where({ programme_id: toBinary(programmeId), person_id: toBinary(personId), state: 'staged' }).where('expires_at', '>', now)
    .orderBy('created_at', 'desc').orderBy('id', 'desc').limit(50) as RawStaged[]
  return rows.map(toStaged)
}

/** Staged uploads whose time is over, oldest first. */
export async function overdueStaged(db: Knex, now: Date, limit: number): Promise<StagedRow[]> {
  const rows = await db('upload_staged').where('state', 'staged').where('expires_at', '<=', now).orderBy('expires_at').limit(limit) as RawStaged[]
  return rows.map(toStaged)
}

/** Of these storage keys those that nothing needs: no upload refers to them and no staged upload is still open. */
export async function unneededKeys(db: Knex, keys: readonly string[]): Promise<string[]> {
  if (keys.length === 0) return []
  const kept = await db('upload').whereIn('storage_key', keys).pluck('storage_key') as string[]
  const open = await db('upload_staged').whereIn('storage_key', keys).where('state', 'staged').pluck('storage_key') as string[]
  const needed = new Set([...kept, ...open])
  return keys.filter(key => !needed.has(key))
}

export interface UploadRow {
  id: string
  sha256: Buffer
  storageKey: string
  bytes: number
  fileName: string
  uploadedBy: string
  uploadedByName: string
  uploadedAt: Date
}

interface RawUpload { id: Buffer, sha256: Buffer, storage_key: string, bytes: number, file_name: string, uploaded_by: Buffer, person_name: string, uploaded_at: Date }

export async function insertUpload(trx: Knex, row: Omit<UploadRow, 'uploadedByName'> & { programmeId: string, stagedId: string }): Promise<void> {
  await trx('upload').insert({
    id: toBinary(row.id), programme_id: toBinary(row.programmeId), sha256: row.sha256, storage_key: row.storageKey, bytes: row.bytes, file_name: row.fileName,
    staged_id: toBinary(row.stagedId), uploaded_by: toBinary(row.uploadedBy), uploaded_at: row.uploadedAt,
  })
}

/** @param signedOnly an upload behind at least one signed fit, else it is not there */
export async function findUpload(db: Knex, { programmeId, id, signedOnly = false }: { programmeId: string, id: string, signedOnly?: boolean }): Promise<UploadRow | null> {
  const row = await db('upload as u').join('person as p', 'p.id', 'u.uploaded_by').where({ 'u.id': toBinary(id), 'u.programme_id': toBinary(programmeId) })
    .modify((query) => {
      if (signedOnly) void query.whereExists(db('series as s').join('fit as f', 'f.series_id', 's.id').join('check_current as c', 'c.subject_id', 'f.id').whereRaw('s.upload_id = u.id').where('c.state', 'signed').select(db.raw('1')))
    })
    .first('u.id', 'u.sha256', 'u.storage_key', 'u.bytes', 'u.file_name', 'u.uploaded_by', 'u.uploaded_at', 'p.name as person_name') as RawUpload | undefined
  return row ? toUpload(row) : null
}

const toUpload = (row: RawUpload): UploadRow => ({
  id: fromBinary(row.id), sha256: row.sha256, storageKey: row.storage_key, bytes: row.bytes, fileName: row.file_name, uploadedBy: fromBinary(row.uploaded_by),
  uploadedByName: row.person_name, uploadedAt: row.uploaded_at,
})

/** Uploads of the programme that hold the very same bytes, newest first, each with the series made of it. */
export async function uploadsWithBytes(db: Knex, programmeId: string, sha256: Buffer) {
  const rows = await db('upload as u').join('person as p', 'p.id', 'u.uploaded_by').leftJoin('series as s', 's.upload_id', 'u.id').leftJoin('complex as x', 'x.id', 's.complex_id')
    .where({ 'u.programme_id': toBinary(programmeId), 'u.sha256': sha256 }).orderBy('u.uploaded_at', 'desc').orderBy('s.id').limit(50)
    .select('u.id as upload_id', 'u.uploaded_at', 'u.file_name', 'p.name as person_name', 's.id as series_id', 's.title', 'x.code') as
    { upload_id: Buffer, uploaded_at: Date, file_name: string, person_name: string, series_id: Buffer | null, title: string, code: string }[]
  const byUpload = new Map<string, { at: Date, personName: string, fileName: string, series: { id: string, title: string, agentCode: string }[] }>()
  for (const row of rows) {
    const key = hex(row.upload_id)
    const entry = byUpload.get(key) ?? { at: row.uploaded_at, personName: row.person_name, fileName: row.file_name, series: [] }
    if (row.series_id) entry.series.push({ id: fromBinary(row.series_id), title: row.title, agentCode: row.code })
    byUpload.set(key, entry)
  }
  return [...byUpload.values()]
}

import type { Knex } from 'knex'
import type { Conditions } from '../../shared/measurements/types'
import type { RecordEntry } from '../../shared/evidence/records/entry'
import type { CheckState } from '../../shared/checks/transitions'
import type { Scope } from '../../shared/permissions'
import { sealed } from '../platform/hashes'
import { fromBinary, fromBinaryOrNull, toBinary, toBinaryOrNull } from '../platform/ids'
import type { SourceRow } from './sources'

/** What is stored of one version: the entry as typed, and what the evidence was worked out with. */
export interface RecordPayload { kindVersion: number, metal: string, entry: RecordEntry, reason: string | null }

export interface NewRecord {
  id: string, programmeId: string, rootId: string, versionNo: number, replaces: string | null, kind: string, complexId: string, batchId: string | null
  payload: RecordPayload, conditions: Conditions, sourceId: string, personId: string, at: Date
}

export interface RecordRow {
  id: string, rootId: string, versionNo: number, newestVersionNo: number, kind: string, complexId: string, complexCode: string, batchId: string | null, lot: string | null
  payload: RecordPayload, conditions: Conditions, source: SourceRow, personId: string, personName: string, at: Date, checkState: CheckState, checkSeq: number
}

/** @throws a duplicate on the keys `version` or `successor` when somebody else added the next version first */
export async function insertRecord(trx: Knex, one: NewRecord): Promise<void> {
  const { text, hash } = sealed(one.payload)
  await trx('record').insert({
    id: toBinary(one.id), programme_id: toBinary(one.programmeId), root_id: toBinary(one.rootId), version_no: one.versionNo, replaces: toBinaryOrNull(one.replaces), kind: one.kind,
    complex_id: toBinary(one.complexId), ligand_id: null, batch_id: toBinaryOrNull(one.batchId), payload: text, payload_hash: hash, conditions: sealed(one.conditions).text,
    source_id: toBinary(one.sourceId), created_by: toBinary(one.personId), created_at: one.at,
  })
}

interface Raw {
  id: Buffer, root_id: Buffer, version_no: number, newest: number, kind: string, complex_id: Buffer, code: string, batch_id: Buffer | null, lot: string | null, payload: string, conditions: string
  source_id: Buffer, citation: string, doi: string | null, origin: SourceRow['origin'], note: string | null, created_by: Buffer, name: string, created_at: Date, state: CheckState | null, seq: number | null
}

function records(db: Knex, programmeId: string, scope: Scope) {
  return db('record as r').join('complex as c', 'c.id', 'r.complex_id').leftJoin('batch as b', 'b.id', 'r.batch_id').join('source as s', 's.id', 'r.source_id').join('person as p', 'p.id', 'r.created_by')
    .leftJoin('check_current as k', 'k.subject_id', 'r.id').where('r.programme_id', toBinary(programmeId))
    .modify((query) => { if (scope === 'signed') void query.where('k.state', 'signed') })
}

const columns = (db: Knex) => ['r.id', 'r.root_id', 'r.version_no', 'r.kind', 'r.complex_id', 'c.code', 'r.batch_id', 'b.lot', 'r.payload', 'r.conditions', 'r.source_id', 's.citation', 's.doi', 's.origin', 's.note',
  'r.created_by', 'p.name', 'r.created_at', 'k.state', 'k.seq', db.raw('(SELECT MAX(n.version_no) FROM record n WHERE n.root_id = r.root_id) AS newest')]

const toRecord = (row: Raw): RecordRow => ({
  id: fromBinary(row.id), rootId: fromBinary(row.root_id), versionNo: row.version_no, newestVersionNo: Number(row.newest), kind: row.kind, complexId: fromBinary(row.complex_id), complexCode: row.code,
  batchId: fromBinaryOrNull(row.batch_id), lot: row.lot, payload: JSON.parse(row.payload) as RecordPayload, conditions: JSON.parse(row.conditions) as Conditions,
  source: { id: fromBinary(row.source_id), citation: row.citation, doi: row.doi, origin: row.origin, note: row.note },
  personId: fromBinary(row.created_by), personName: row.name, at: row.created_at, checkState: row.state ?? 'draft', checkSeq: row.seq ?? 0,
})

/** One version; with a 'signed' scope only when it is signed. */
export async function findRecord(db: Knex, programmeId: string, id: string, scope: Scope): Promise<RecordRow | null> {
  const row = await records(db, programmeId, scope).where('r.id', toBinary(id)).first(columns(db)) as Raw | undefined
  return row ? toRecord(row) : null
}

/** Every version of one chain, newest first. */
export async function recordChain(db: Knex, programmeId: string, rootId: string, scope: Scope, { latest = false } = {}): Promise<RecordRow[]> {
  const query = records(db, programmeId, scope).where('r.root_id', toBinary(rootId)).orderBy('r.version_no', 'desc')
  const rows = await (latest ? query.forShare() : query).select(columns(db)) as Raw[]
  return rows.map(toRecord)
}

/** The newest visible version of every chain, newest first; of one agent, or of all. */
export async function listRecordRows(db: Knex, programmeId: string, scope: Scope, complexId?: string): Promise<RecordRow[]> {
  const rows = await records(db, programmeId, scope).modify((query) => { if (complexId) void query.where('r.complex_id', toBinary(complexId)) })
    .orderBy('r.created_at', 'desc').orderBy('r.id', 'desc').select(columns(db)) as Raw[]
  const seen = new Set<string>()
  return rows.map(toRecord).sort((a, b) => b.at.getTime() - a.at.getTime() || b.versionNo - a.versionNo).filter(({ rootId }) => !seen.has(rootId) && seen.add(rootId))
}

import type { Knex } from 'knex'
import type { ReadinessPayload } from '../../shared/schemas/readiness'
import { fromBinary, toBinary, toBinaryOrNull } from '../platform/ids'

export interface ReadinessRow { id: string, complexId: string, versionNo: number, payload: ReadinessPayload, reason: string, personName: string, at: Date }
interface Raw { id: Buffer, complex_id: Buffer, version_no: number, payload: string, reason: string, name: string, created_at: Date }

const rowsOf = (db: Knex, programmeId: string) => db('readiness as r').join('person as p', 'p.id', 'r.created_by').where('r.programme_id', toBinary(programmeId))
const COLUMNS = ['r.id', 'r.complex_id', 'r.version_no', 'r.payload', 'r.reason', 'p.name', 'r.created_at'] as const
const toRow = (row: Raw): ReadinessRow => ({
  id: fromBinary(row.id), complexId: fromBinary(row.complex_id), versionNo: row.version_no, payload: JSON.parse(row.payload) as ReadinessPayload, reason: row.reason, personName: row.name, at: row.created_at,
})

/** Versions of one agent's readiness list, newest first. `latest` reads past the snapshot of a transaction, as after a duplicate. */
export async function readinessVersions(db: Knex, programmeId: string, complexId: string, { latest = false } = {}): Promise<ReadinessRow[]> {
  const query = rowsOf(db, programmeId).where('r.complex_id', toBinary(complexId)).orderBy('r.version_no', 'desc').select(COLUMNS)
  return (await (latest ? query.forShare() : query) as Raw[]).map(toRow)
}

/** The list that counts of every agent that has one. */
export async function currentReadiness(db: Knex, programmeId: string): Promise<ReadinessRow[]> {
  const rows = await rowsOf(db, programmeId).whereNotExists(db('readiness as n').whereRaw('n.supersedes = r.id').select(db.raw('1'))).select(COLUMNS) as Raw[]
  return rows.map(toRow)
}

/** @throws a duplicate on the key `version` when somebody entered the next version first */
export async function insertReadiness(trx: Knex, one: { id: string, programmeId: string, complexId: string, versionNo: number, supersedes: string | null, payload: string, reason: string, personId: string, at: Date }): Promise<void> {
  await trx('readiness').insert({
    id: toBinary(one.id), programme_id: toBinary(one.programmeId), complex_id: toBinary(one.complexId), version_no: one.versionNo, supersedes: toBinaryOrNull(one.supersedes), payload: one.payload,
    reason: one.reason, created_by: toBinary(one.personId), created_at: one.at,
  })
}

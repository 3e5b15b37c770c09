import type { Knex } from 'knex'
import { fromBinary, toBinary } from '../platform/ids'

export interface BatchRow { id: string, complexId: string, lot: string, personName: string, at: Date }
interface Raw { id: Buffer, complex_id: Buffer, lot: string, name: string, created_at: Date }

const batches = (db: Knex, programmeId: string) => db('batch as b').join('person as p', 'p.id', 'b.created_by').where('b.programme_id', toBinary(programmeId))
const COLUMNS = ['b.id', 'b.complex_id', 'b.lot', 'p.name', 'b.created_at'] as const
const toBatch = (row: Raw): BatchRow => ({ id: fromBinary(row.id), complexId: fromBinary(row.complex_id), lot: row.lot, personName: row.name, at: row.created_at })

/** @throws a duplicate on the key `lot` when this agent has the lot already */
export async function insertBatch(trx: Knex, one: { id: string, programmeId: string, complexId: string, lot: string, personId: string, at: Date }): Promise<void> {
  await trx('batch').insert({ id: toBinary(one.id), programme_id: toBinary(one.programmeId), complex_id: toBinary(one.complexId), lot: one.lot, created_by: toBinary(one.personId), created_at: one.at })
}

/** `latest`: read past the snapshot of a transaction, as after a duplicate. */
export async function findBatch(db: Knex, programmeId: string, complexId: string, lot: string, { latest = false } = {}): Promise<BatchRow | null> {
  const query = batches(db, programmeId).where({ 'b.complex_id': toBinary(complexId), 'b.lot': lot })
  const row = await (latest ? query.forShare() : query).first(COLUMNS) as Raw | undefined
  return row ? toBatch(row) : null
}

/** Batches in the order they were registered, newest first. */
export async function listBatches(db: Knex, programmeId: string, complexId?: string): Promise<BatchRow[]> {
  const rows = await batches(db, programmeId).modify((query) => { if (complexId) void query.where('b.complex_id', toBinary(complexId)) })
    .orderBy('b.created_at', 'desc').orderBy('b.id', 'desc').select(COLUMNS) as Raw[]
  return rows.map(toBatch)
}

import type { Knex } from 'knex'
import { fromBinary, toBinary } from '../platform/ids'

export interface UploadTarget { complexId: string, complexCode: string, batchId: string, lot: string }

/** Every batch of the programme with its agent: what a tube of an upload can be assigned to. */
export async function uploadTargets(db: Knex, programmeId: string): Promise<UploadTarget[]> {
  const rows = await db('batch as b').join('complex as x', 'x.id', 'b.complex_id').where('b.programme_id', toBinary(programmeId)).orderBy('x.code').orderBy('b.created_at')
    .select('x.id as complex_id', 'x.code', 'b.id as batch_id', 'b.lot') as { complex_id: Buffer, code: string, batch_id: Buffer, lot: string }[]
  return rows.map(row => ({ complexId: fromBinary(row.complex_id), complexCode: row.code, batchId: fromBinary(row.batch_id), lot: row.lot }))
}

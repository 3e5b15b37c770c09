import type { Knex } from 'knex'
import { fromBinary, toBinary } from '../platform/ids'

export type SourceOrigin = 'paper' | 'memory' | 'own'
export interface SourceRow { id: string, citation: string, doi: string | null, origin: SourceOrigin, note: string | null }
interface Raw { id: Buffer, citation: string, doi: string | null, origin: SourceOrigin, note: string | null }

export async function insertSource(trx: Knex, one: SourceRow & { programmeId: string, personId: string, at: Date }): Promise<void> {
  await trx('source').insert({
    id: toBinary(one.id), programme_id: toBinary(one.programmeId), citation: one.citation, doi: one.doi, origin: one.origin, note: one.note, created_by: toBinary(one.personId), created_at: one.at,
  })
}

export async function findSource(db: Knex, programmeId: string, id: string): Promise<SourceRow | null> {
  const row = await db('source').where({ programme_id: toBinary(programmeId), id: toBinary(id) }).first('id', 'citation', 'doi', 'origin', 'note') as Raw | undefined
  return row ? { ...row, id: fromBinary(row.id) } : null
}

/** Sources of a programme, newest first. */
export async function listSourceRows(db: Knex, programmeId: string): Promise<SourceRow[]> {
  const rows = await db('source').where({ programme_id: toBinary(programmeId) }).orderBy('created_at', 'desc').limit(500).select('id', 'citation', 'doi', 'origin', 'note') as Raw[]
  return rows.map(row => ({ ...row, id: fromBinary(row.id) }))
}

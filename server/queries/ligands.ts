import type { Knex } from 'knex'
import { fromBinary, toBinary } from '../platform/ids'

export interface LigandRow { id: string, code: string, personName: string, at: Date }
interface Raw { id: Buffer, code: string, name: string, created_at: Date }

const ligands = (db: Knex, programmeId: string) => db('ligand as l').join('person as p', 'p.id', 'l.created_by').where('l.programme_id', toBinary(programmeId))
const COLUMNS = ['l.id', 'l.code', 'p.name', 'l.created_at'] as const
const toLigand = (row: Raw): LigandRow => ({ id: fromBinary(row.id), code: row.code, personName: row.name, at: row.created_at })

/** @throws a duplicate on the key `code` when the code is taken in this programme */
export async function insertLigand(trx: Knex, one: { id: string, programmeId: string, code: string, personId: string, at: Date }): Promise<void> {
  await trx('ligand').insert({ id: toBinary(one.id), programme_id: toBinary(one.programmeId), code: one.code, created_by: toBinary(one.personId), created_at: one.at })
}

/** `latest`: read past the snapshot of a transaction, as after a duplicate. */
export async function findLigand(db: Knex, programmeId: string, by: { code: string } | { id: string }, { latest = false } = {}): Promise<LigandRow | null> {
  const query = ligands(db, programmeId).where('code' in by ? { 'l.code': by.code } : { 'l.id': toBinary(by.id) })
  const row = await (latest ? query.forShare() : query).first(COLUMNS) as Raw | undefined
  return row ? toLigand(row) : null
}

export async function listLigandRows(db: Knex, programmeId: string): Promise<LigandRow[]> {
  const rows = await ligands(db, programmeId).orderBy('l.code').select(COLUMNS) as Raw[]
  return rows.map(toLigand)
}

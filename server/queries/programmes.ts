import type { Knex } from 'knex'
import { fromBinary, toBinary } from '../platform/ids'

export interface ProgrammeRow { id: string, code: string, name: string, description: string, partnerSeesRawFiles: boolean, isDemo: boolean, createdAt: Date }
interface Raw { id: Buffer, code: string, name: string, description: string, partner_sees_raw_files: number, is_demo: number, created_at: Date }

const toProgramme = (row: Raw): ProgrammeRow => ({
  id: fromBinary(row.id), code: row.code, name: row.name, description: row.description, partnerSeesRawFiles: Boolean(row.partner_sees_raw_files), isDemo: Boolean(row.is_demo), createdAt: row.created_at,
})

export async function findProgramme(db: Knex, id: string): Promise<ProgrammeRow | null> {
  const row = await db('programme').where({ id: toBinary(id) }).first('*') as Raw | undefined
  return row ? toProgramme(row) : null
}

export async function findProgrammeByCode(db: Knex, code: string): Promise<ProgrammeRow | null> {
  const row = await db('programme').where({ code }).first('*') as Raw | undefined
  return row ? toProgramme(row) : null
}

export async function listProgrammes(db: Knex): Promise<ProgrammeRow[]> {
  const rows = await db('programme').orderBy('name').orderBy('id') as Raw[]
  return rows.map(toProgramme)
}

/** @throws a duplicate on the key `code` when the code is taken */
export async function insertProgramme(trx: Knex, one: { id: string, code: string, name: string, description: string, isDemo: boolean, at: Date }): Promise<void> {
  await trx('programme').insert({ id: toBinary(one.id), code: one.code, name: one.name, description: one.description, is_demo: one.isDemo, created_at: one.at })
}

export async function updateProgramme(trx: Knex, id: string, change: { name: string, description: string, partnerSeesRawFiles: boolean }): Promise<void> {
  await trx('programme').where({ id: toBinary(id) }).update({ name: change.name, description: change.description, partner_sees_raw_files: change.partnerSeesRawFiles })
}

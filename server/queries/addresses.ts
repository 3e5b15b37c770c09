import type { Knex } from 'knex'
import { fromBinary, toBinary } from '../platform/ids'
import type { ProgrammeRole } from '../../shared/permissions'
import { parseRoles } from './people'

export interface Addressee { personId: string, name: string, email: string }

/** Names and addresses of people who are still active. */
export async function addressees(db: Knex, personIds: readonly string[]): Promise<Addressee[]> {
  if (personIds.length === 0) return []
  const rows = await db('person').whereIn('id', personIds.map(toBinary)).where('state', 'active').orderBy('email_ci').select('id', 'name', 'email_ci') as { id: Buffer, name: string, email_ci: string }[]
  return rows.map(row => ({ personId: fromBinary(row.id), name: row.name, email: row.email_ci }))
}

/** Active members of a programme, with a role where one is asked for. */
export async function programmeAddressees(db: Knex, programmeId: string, role?: ProgrammeRole): Promise<Addressee[]> {
  const rows = await db('membership as m').join('person as p', 'p.id', 'm.person_id').where('m.programme_id', toBinary(programmeId)).where('p.state', 'active')
    .orderBy('p.email_ci').select('p.id', 'p.name', 'p.email_ci', 'm.roles') as { id: Buffer, name: string, email_ci: string, roles: string }[]
  return rows.filter(row => !role || parseRoles(row.roles).includes(role)).map(row => ({ personId: fromBinary(row.id), name: row.name, email: row.email_ci }))
}

export async function programmeCode(db: Knex, programmeId: string): Promise<string> {
  const row = await db('programme').where({ id: toBinary(programmeId) }).first('code') as { code: string } | undefined
  if (!row) throw new Error(`There is no programme ${programmeId}.`)
  return row.code
}

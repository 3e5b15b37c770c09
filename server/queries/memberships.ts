import type { Knex } from 'knex'
import type { ProgrammeRole } from '../../shared/permissions'
import { fromBinary, toBinary, toBinaryOrNull } from '../platform/ids'
import { parseRoles, writeRoles } from './people'

export interface NamedMembership { personId: string, programmeId: string, programmeCode: string, programmeName: string, roles: ProgrammeRole[] }

/** Memberships of one person, or of everybody, with the names of the programmes. */
export async function namedMemberships(db: Knex, personId?: string): Promise<NamedMembership[]> {
  const rows = await db('membership').join('programme', 'programme.id', 'membership.programme_id').modify((query) => { if (personId) void query.where('membership.person_id', toBinary(personId)) })
    .orderBy('programme.name').select('membership.person_id', 'programme.id', 'programme.code', 'programme.name', 'membership.roles') as { person_id: Buffer, id: Buffer, code: string, name: string, roles: string }[]
  return rows.map(row => ({ personId: fromBinary(row.person_id), programmeId: fromBinary(row.id), programmeCode: row.code, programmeName: row.name, roles: parseRoles(row.roles) }))
    .filter(one => one.roles.length > 0)
}

export interface MemberRow { personId: string, name: string, email: string, roles: ProgrammeRole[], since: Date | null }

/** People who have a role in a programme. `since`: when their roles last changed. */
export async function listMembers(db: Knex, programmeId: string): Promise<MemberRow[]> {
  const since = db('membership_event as e').whereRaw('e.programme_id = m.programme_id AND e.person_id = m.person_id').max('e.at')
  const rows = await db('membership as m').join('person as p', 'p.id', 'm.person_id').where('m.programme_id', toBinary(programmeId)).where('p.state', 'active')
    .orderBy('p.name').orderBy('p.id').select('p.id', 'p.name', 'p.email_ci', 'm.roles', since.as('since')) as { id: Buffer, name: string, email_ci: string, roles: string, since: Date | null }[]
  return rows.map(row => ({ personId: fromBinary(row.id), name: row.name, email: row.email_ci, roles: parseRoles(row.roles), since: row.since })).filter(one => one.roles.length > 0)
}

/**
 * Roles of everybody in a programme, locked by its row: two leads who remove each other at once must not leave it without one.
 * Removed people are left out.
 */
export async function lockMembers(trx: Knex.Transaction, programmeId: string): Promise<Map<string, ProgrammeRole[]>> {
  await trx('programme').where({ id: toBinary(programmeId) }).forUpdate().first('id')
  const rows = await trx('membership as m').join('person as p', 'p.id', 'm.person_id').where('m.programme_id', toBinary(programmeId)).where('p.state', 'active')
    // A locking read: a plain one would show the state before the lock was waited for.
    .forUpdate().select('m.person_id', 'm.roles') as { person_id: Buffer, roles: string }[]
  return new Map(rows.map(row => [fromBinary(row.person_id), parseRoles(row.roles)] as const).filter(([, roles]) => roles.length > 0))
}

export interface RoleChange { id: string, programmeId: string, personId: string, roles: readonly ProgrammeRole[], changedBy: string | null, at: Date }

/** Writes the roles that hold from now on (none = no member any more) and the event that says so. */
export async function writeMembership(trx: Knex, one: RoleChange): Promise<void> {
  const key = { programme_id: toBinary(one.programmeId), person_id: toBinary(one.personId) }
  const roles = writeRoles(one.roles)
  if (one.roles.length === 0) {
    await trx('membership').where(key).delete()
  }
  else {
    const there = await trx('membership').where(key).first('roles')
    if (there) await trx('membership').where(key).update({ roles })
    else await trx('membership').insert({ ...key, roles })
  }
  await trx('membership_event').insert({ id: toBinary(one.id), ...key, roles, changed_by: toBinaryOrNull(one.changedBy), at: one.at })
}

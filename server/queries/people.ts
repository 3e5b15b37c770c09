import type { Knex } from 'knex'
import type { Actor, Membership, ProgrammeRole } from '../../shared/permissions'
import { PROGRAMME_ROLES } from '../../shared/permissions'
import { fromBinary, toBinary } from '../platform/ids'

interface ActorRow { person_id: Buffer, name: string, is_administrator: number }

/** The actor behind a session, or null when the session ended, expired, or belongs to an epoch before a removal or a change of password. */
export async function findActor(db: Knex, sessionId: string): Promise<Actor | null> {
  const row = await db('session').join('person', 'person.id', 'session.person_id')
    .where('session.id', toBinary(sessionId)).whereNull('session.ended_at').where('person.state', 'active')
    .whereRaw('session.expires_at > NOW(6)').whereRaw('session.epoch = person.session_epoch')
    .first('person.id as person_id', 'person.name', 'person.is_administrator') as ActorRow | undefined
  if (!row) return null
  const personId = fromBinary(row.person_id)
  return { personId, sessionId, name: row.name, isAdministrator: Boolean(row.is_administrator), memberships: await membershipsOf(db, personId) }
}

export async function membershipsOf(db: Knex, personId: string): Promise<Membership[]> {
  const rows = await db('membership').join('programme', 'programme.id', 'membership.programme_id').where('membership.person_id', toBinary(personId))
    .orderBy('programme.name').select('programme.id', 'programme.code', 'membership.roles') as { id: Buffer, code: string, roles: string }[]
  return rows.map(row => ({ programmeId: fromBinary(row.id), programmeCode: row.code, roles: parseRoles(row.roles) })).filter(one => one.roles.length > 0)
}

/** Roles are stored as words joined by commas, in the order of the table. */
export function parseRoles(text: string): ProgrammeRole[] {
  const words = text.split(',')
  return PROGRAMME_ROLES.filter(role => words.includes(role))
}

export const writeRoles = (roles: readonly ProgrammeRole[]): string => PROGRAMME_ROLES.filter(role => roles.includes(role)).join(',')

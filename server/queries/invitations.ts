import type { Knex } from 'knex'
import type { ProgrammeRole } from '../../shared/permissions'
import { fromBinary, fromBinaryOrNull, toBinary, toBinaryOrNull } from '../platform/ids'
import { parseRoles, writeRoles } from './people'

export interface InvitationRow {
  id: string
  programmeId: string | null
  programmeCode: string | null
  programmeName: string | null
  email: string
  roles: ProgrammeRole[]
  asAdministrator: boolean
  /** As it stands by the database's clock. */
  state: 'open' | 'accepted' | 'revoked' | 'expired'
  invitedBy: string | null
  createdAt: Date
  expiresAt: Date
}

interface Raw {
  id: Buffer, programme_id: Buffer | null, programme_code: string | null, programme_name: string | null, email_ci: string, roles: string, as_administrator: number,
  state: 'open' | 'accepted' | 'revoked', inviter: string | null, created_at: Date, expires_at: Date, is_expired: number
}

const toInvitation = (row: Raw): InvitationRow => ({
  id: fromBinary(row.id), programmeId: fromBinaryOrNull(row.programme_id), programmeCode: row.programme_code, programmeName: row.programme_name, email: row.email_ci,
  roles: parseRoles(row.roles), asAdministrator: Boolean(row.as_administrator), state: row.state === 'open' && row.is_expired ? 'expired' : row.state,
  invitedBy: row.inviter, createdAt: row.created_at, expiresAt: row.expires_at,
})

const invitations = (db: Knex) => db('invitation as i').leftJoin('programme as p', 'p.id', 'i.programme_id').leftJoin('person as w', 'w.id', 'i.invited_by')
  .select('i.id', 'i.programme_id', 'p.code as programme_code', 'p.name as programme_name', 'i.email_ci', 'i.roles', 'i.as_administrator', 'i.state', 'w.name as inviter',
    'i.created_at', 'i.expires_at', db.raw('i.expires_at <= NOW(6) AS is_expired'))

export interface NewInvitation { id: string, programmeId: string | null, email: string, roles: readonly ProgrammeRole[], asAdministrator: boolean, hash: Buffer, invitedBy: string, days: number, at: Date }

export async function insertInvitation(trx: Knex, one: NewInvitation): Promise<void> {
  await trx('invitation').insert({
    id: toBinary(one.id), programme_id: toBinaryOrNull(one.programmeId), email_ci: one.email, roles: writeRoles(one.roles), as_administrator: one.asAdministrator, token_hash: one.hash,
    invited_by: toBinary(one.invitedBy), created_at: one.at, expires_at: trx.raw('DATE_ADD(NOW(6), INTERVAL ? DAY)', [one.days]),
  })
}

export async function findInvitationByToken(db: Knex, hash: Buffer): Promise<InvitationRow | null> {
  const row = await invitations(db).where('i.token_hash', hash).first() as Raw | undefined
  return row ? toInvitation(row) : null
}

/** An invitation of one programme; null programme = one into the installation or of its administrator. */
export async function findInvitation(db: Knex, id: string, programmeId: string): Promise<InvitationRow | null> {
  const row = await invitations(db).where({ 'i.id': toBinary(id), 'i.programme_id': toBinary(programmeId) }).first() as Raw | undefined
  return row ? toInvitation(row) : null
}

export async function findAnyInvitation(db: Knex, id: string): Promise<InvitationRow | null> {
  const row = await invitations(db).where('i.id', toBinary(id)).first() as Raw | undefined
  return row ? toInvitation(row) : null
}

/** Newest first. */
export async function listInvitations(db: Knex, programmeId?: string): Promise<InvitationRow[]> {
  const rows = await invitations(db).modify((query) => { if (programmeId) void query.where('i.programme_id', toBinary(programmeId)) })
    .orderBy('i.created_at', 'desc').orderBy('i.id', 'desc').limit(200) as Raw[]
  return rows.map(toInvitation)
}

/** Ends an open invitation. @returns false when it was not open any more: of two who accept at once, one gets true */
export async function closeInvitation(trx: Knex, id: string, state: 'accepted' | 'revoked'): Promise<boolean> {
  return await trx('invitation').where({ id: toBinary(id), state: 'open' }).whereRaw('expires_at > NOW(6)').update({ state, ended_at: trx.raw('NOW(6)') }) === 1
}

/** Revokes what is still open for an address: in one programme, among the administrator's own (null), or everywhere (undefined). @returns how many */
export async function revokeOpenInvitations(trx: Knex, email: string, programmeId?: string | null): Promise<number> {
  return trx('invitation').where({ email_ci: email, state: 'open' }).modify((query) => { if (programmeId !== undefined) void query.where({ programme_id: toBinaryOrNull(programmeId) }) })
    .update({ state: 'revoked', ended_at: trx.raw('NOW(6)') })
}

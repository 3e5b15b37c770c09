import type { Actor } from '../../shared/permissions'
import type { InvitationRow, Member } from '../../shared/schemas/people'
import type { Deps } from '../platform/deps'
import { listInvitations as readInvitations } from '../queries/invitations'
import { listMembers as readMembers } from '../queries/memberships'
import { toInvitationDto } from './invite'

/** Who has which roles in a programme, by name. */
export async function listMembers({ db }: Pick<Deps, 'db'>, { actor, programmeId }: { actor: Actor, programmeId: string }): Promise<{ members: Member[] }> {
  const rows = await readMembers(db, programmeId)
  return { members: rows.map(row => ({ ...row, isYou: row.personId === actor.personId, since: row.since?.toISOString() ?? null })) }
}

/** Invitations into a programme, or all of the installation, newest first. */
export async function listInvitations({ db }: Pick<Deps, 'db'>, { programmeId }: { programmeId?: string }): Promise<{ invitations: InvitationRow[] }> {
  const rows = await readInvitations(db, programmeId)
  return { invitations: rows.map(toInvitationDto) }
}

import type { Actor, ProgrammeRole } from '../../shared/permissions'
import { AppError } from '../../shared/errors'
import type { InvitationRow as InvitationDto } from '../../shared/schemas/people'
import type { Deps } from '../platform/deps'
import { makeToken } from '../platform/tokens'
import { findInvitationByToken, insertInvitation, revokeOpenInvitations, type InvitationRow } from '../queries/invitations'
import { lockMembers } from '../queries/memberships'
import { findPersonByEmail } from '../queries/persons'
import { findProgramme } from '../queries/programmes'
import { unitOfWork, type Command } from './unitOfWork'

export const INVITATION_DAYS = 7

export interface Invite {
  actor: Actor
  email: string
  /** null = into the installation, as an administrator */
  programmeId: string | null
  roles: readonly ProgrammeRole[]
  idempotency: Command['idempotency']
}

/**
 * Writes an invitation and the mail with its link. A new one to the same address takes the place of one that is open.
 * @throws AppError('conflict') when the person is there already
 */
export async function invite(deps: Deps, { actor, email, programmeId, roles, idempotency }: Invite): Promise<InvitationDto> {
  const { token, hash } = makeToken()
  return unitOfWork(deps, { actor, name: 'invite', programmeId, idempotency }, async ({ trx, id, now, sendMail }) => {
    await refuseWhoIsThere(trx, { email, programmeId })
    const replaced = await revokeOpenInvitations(trx, email, programmeId)
    const invitationId = id()
    await insertInvitation(trx, { id: invitationId, programmeId, email, roles, asAdministrator: programmeId === null, hash, invitedBy: actor.personId, days: INVITATION_DAYS, at: now })
    const into = programmeId === null ? null : await findProgramme(trx, programmeId)
    await sendMail({ to: email, template: 'account.invitation', dedupeKey: `invitation:${invitationId}`, ...words({ deps, actor, token, programmeName: into?.name ?? null, roles }) })
    const row = await findInvitationByToken(trx, hash)
    if (!row) throw new Error(`The invitation ${invitationId} is not there after it was written.`)
    return { result: toInvitationDto(row), subject: `invitation ${invitationId}`, payload: { email, roles, asAdministrator: programmeId === null, replaced } }
  })
}

export const toInvitationDto = (row: InvitationRow): InvitationDto => ({
  id: row.id, email: row.email, roles: row.roles, asAdministrator: row.asAdministrator, programmeName: row.programmeName, state: row.state, invitedBy: row.invitedBy,
  createdAt: row.createdAt.toISOString(), expiresAt: row.expiresAt.toISOString(),
})

async function refuseWhoIsThere(trx: Parameters<typeof lockMembers>[0], { email, programmeId }: { email: string, programmeId: string | null }): Promise<void> {
  const person = await findPersonByEmail(trx, email)
  if (person?.state !== 'active') return
  if (programmeId === null) {
    if (person.isAdministrator) throw new AppError('conflict', `${person.name} is an administrator already.`, { field: 'email' })
    return
  }
  const members = await lockMembers(trx, programmeId)
  if (members.has(person.id)) throw new AppError('conflict', `${person.name} is in this programme already.`, { field: 'email', accepted: 'setting their roles in the list' })
}

interface Letter { deps: Deps, actor: Actor, token: string, programmeName: string | null, roles: readonly ProgrammeRole[] }

function words({ deps, actor, token, programmeName, roles }: Letter): { subject: string, body: string } {
  const what = programmeName === null ? 'to administer this installation of Lanthorn' : `into the programme ${programmeName} as ${roles.join(' and ')}`
  return {
    subject: programmeName === null ? 'Invitation to Lanthorn' : `Invitation into ${programmeName} on Lanthorn`,
    body: `${actor.name} invites you ${what}.\n\nThis link opens it, once and within ${INVITATION_DAYS} days:\n\n${deps.origin}/invitation/${token}\n\nWhoever does not know ${actor.name} need do nothing.\n`,
  }
}

import type { Actor, ProgrammeRole } from '../../shared/permissions'
import { AppError } from '../../shared/errors'
import type { Deps } from '../platform/deps'
import { lockMembers, writeMembership } from '../queries/memberships'
import { endOtherSessions } from '../queries/sessions'
import { unitOfWork, type Command } from './unitOfWork'

export interface RoleSetting { actor: Actor, programmeId: string, personId: string, roles: readonly ProgrammeRole[], idempotency: Command['idempotency'] }

/**
 * Sets what a member may do in a programme; no roles = removed from it. Holds at once: roles are read on every request, and the person's sessions end
 * (one's own present session goes on).
 * @throws AppError('notFound') for somebody who is no member; AppError('conflict') when the programme would be left without a lead
 */
export async function setRoles(deps: Deps, { actor, programmeId, personId, roles, idempotency }: RoleSetting): Promise<{ done: true }> {
  const name = roles.length > 0 ? 'setRoles' : 'removeMember'
  return unitOfWork(deps, { actor, name, programmeId, idempotency }, async ({ trx, id, now }) => {
    const members = await lockMembers(trx, programmeId)
    const held = members.get(personId)
    if (!held) throw new AppError('notFound', 'There is no such person in this programme.')
    const otherLeads = [...members].filter(([one, theirs]) => one !== personId && theirs.includes('lead'))
    if (otherLeads.length === 0 && !roles.includes('lead')) throw new AppError('conflict', 'A programme keeps at least one lead.', { field: 'roles', accepted: 'making somebody else lead first' })
    await writeMembership(trx, { id: id(), programmeId, personId, roles, changedBy: actor.personId, at: now })
    await endOtherSessions(trx, personId, personId === actor.personId ? actor.sessionId : null)
    return { result: { done: true as const }, subject: `person ${personId}`, payload: { from: held, to: roles } }
  })
}

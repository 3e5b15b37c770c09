import type { Actor } from '../../shared/permissions'
import { AppError } from '../../shared/errors'
import type { InstallationPerson } from '../../shared/schemas/installation'
import type { Deps } from '../platform/deps'
import { revokeOpenInvitations } from '../queries/invitations'
import { namedMemberships, writeMembership } from '../queries/memberships'
import { findPerson, listPersons, lockAdministrators, updatePerson } from '../queries/persons'
import { endOtherSessions } from '../queries/sessions'
import { unitOfWork, type Command } from './unitOfWork'

/** Everybody with an account, and where they have roles. */
export async function listInstallationPeople({ db }: Pick<Deps, 'db'>, { actor }: { actor: Actor }): Promise<{ people: InstallationPerson[] }> {
  const memberships = await namedMemberships(db)
  const people = (await listPersons(db)).map(row => ({
    personId: row.id, name: row.name, email: row.email, isAdministrator: row.isAdministrator, isDemo: row.isDemo, isYou: row.id === actor.personId, createdAt: row.createdAt.toISOString(),
    memberships: memberships.filter(one => one.personId === row.id).map(({ programmeCode, programmeName, roles }) => ({ programmeCode, programmeName, roles })),
  }))
  return { people }
}

/**
 * Takes a person's account away: roles, sessions and open invitations end at once; what they did keeps their name. A new invitation opens it again.
 * @throws AppError('notFound'); AppError('conflict') for oneself and for the last administrator
 */
export async function removePerson(deps: Deps, { actor, personId, idempotency }: { actor: Actor, personId: string, idempotency: Command['idempotency'] }): Promise<{ done: true }> {
  return unitOfWork(deps, { actor, name: 'removePerson', programmeId: null, idempotency }, async ({ trx, id, now }) => {
    const administrators = await lockAdministrators(trx)
    const person = await findPerson(trx, personId, { lock: true })
    if (person?.state !== 'active') throw new AppError('notFound', 'There is no such person.')
    if (personId === actor.personId) throw new AppError('conflict', 'Nobody removes their own account; another administrator can.')
    if (!administrators.includes(actor.personId)) throw new AppError('notAllowed', 'You are no administrator any more.')
    const memberships = await namedMemberships(trx, personId)
    for (const { programmeId } of memberships) await writeMembership(trx, { id: id(), programmeId, personId, roles: [], changedBy: actor.personId, at: now })
    await updatePerson(trx, personId, { state: 'removed', isAdministrator: false })
    await endOtherSessions(trx, personId, null)
    const revoked = await revokeOpenInvitations(trx, person.email)
    const payload = { email: person.email, name: person.name, programmes: memberships.map(one => one.programmeCode), revokedInvitations: revoked }
    return { result: { done: true as const }, subject: `person ${personId}`, payload }
  })
}

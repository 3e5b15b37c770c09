import type { Actor } from '../../shared/permissions'
import { AppError } from '../../shared/errors'
import type { AcceptInvitation, InvitationShown } from '../../shared/schemas/people'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { hashToken } from '../platform/tokens'
import { closeInvitation, findInvitationByToken, type InvitationRow } from '../queries/invitations'
import { lockMembers, writeMembership } from '../queries/memberships'
import { findPerson, findPersonByEmail, insertPerson, restorePerson, updatePerson, type PersonRow } from '../queries/persons'
import { openSession } from './openSession'
import { proveIdentity } from './proveIdentity'
import { unitOfWork, type Work } from './unitOfWork'

/** What the holder of a link sees. @throws AppError('notFound' | 'expired') */
export async function showInvitation(deps: Deps, { token, actor }: { token: string, actor: Actor | null }): Promise<InvitationShown> {
  const row = await openInvitation(deps, token)
  const person = await findPersonByEmail(deps.db, row.email)
  const knows = person?.state === 'active'
  return {
    email: row.email, roles: row.roles, asAdministrator: row.asAdministrator, programmeName: row.programmeName, invitedBy: row.invitedBy, expiresAt: row.expiresAt.toISOString(), knows,
    signedInAs: actor === null ? 'nobody' : person && actor.personId === person.id ? 'invited' : 'other',
  }
}

export interface Acceptance { token: string, answer: AcceptInvitation, actor: Actor | null, source: string }
/** sessionId: null for whoever was signed in already. */
export interface AcceptedInvitation { sessionId: string | null, programmeCode: string | null }
interface Joiner { personId: string, name: string, previous: PersonRow | null, passwordHash: string | null }

/**
 * Uses an invitation up, once: makes the account where there is none, adds the roles, and signs in whoever was not. Only the person whose address
 * was invited can: by making the account, by its password, or by being signed in.
 * @throws AppError('notFound' | 'expired' | 'conflict'), what proveIdentity throws
 */
export async function acceptInvitation(deps: Deps, { token, answer, actor, source }: Acceptance): Promise<AcceptedInvitation> {
  const row = await openInvitation(deps, token)
  const joiner = await whoJoins(deps, { row, answer, actor, source })
  try {
    return await unitOfWork(deps, { actor: joiner, name: 'acceptInvitation', programmeId: row.programmeId }, async (work) => {
      if (!await closeInvitation(work.trx, row.id, 'accepted')) throw new AppError('expired', OVER.accepted)
      if (joiner.passwordHash !== null) await makeAccount(work, { joiner, passwordHash: joiner.passwordHash, email: row.email })
      if (row.asAdministrator) await updatePerson(work.trx, joiner.personId, { isAdministrator: true })
      if (row.programmeId !== null) await join(work, { row, programmeId: row.programmeId, personId: joiner.personId })
      const sessionId = answer.as === 'signedIn' ? null : await openSession(work.trx, { id: work.id(), personId: joiner.personId })
      const payload = { invitation: row.id, email: row.email, roles: row.roles, asAdministrator: row.asAdministrator, newAccount: answer.as === 'newPerson' }
      return { result: { sessionId, programmeCode: row.programmeCode }, subject: `person ${joiner.personId}`, payload }
    })
  }
  catch (error) {
    if (isDuplicate(error, 'email')) throw new AppError('conflict', 'This address has an account by now. Accept with its password.')
    throw error
  }
}

async function whoJoins(deps: Deps, { row, answer, actor, source }: Omit<Acceptance, 'token'> & { row: InvitationRow }): Promise<Joiner> {
  const person = await findPersonByEmail(deps.db, row.email)
  const isActive = person?.state === 'active'
  if (answer.as === 'newPerson') {
    if (isActive) throw new AppError('conflict', 'This address has an account already. Accept with its password.')
    return { personId: person?.id ?? deps.ids.next(), name: answer.name, previous: person, passwordHash: await deps.passwords.hash(answer.password) }
  }
  if (!isActive) throw new AppError('conflict', 'This address has no account yet. Choose a name and a password.')
  if (answer.as === 'existing') await proveIdentity(deps, { email: row.email, password: answer.password, source })
  else if (actor?.personId !== person.id) throw new AppError('notAllowed', `This invitation is for ${row.email}. Sign in as that person to accept it.`)
  return { personId: person.id, name: person.name, previous: person, passwordHash: null }
}

async function makeAccount({ trx, now }: Work, { joiner, passwordHash, email }: { joiner: Joiner, passwordHash: string, email: string }): Promise<void> {
  if (joiner.previous) {
    const there = await findPerson(trx, joiner.previous.id, { lock: true })
    if (there?.state === 'active') throw new AppError('conflict', 'This address has an account by now. Accept with its password.')
    await restorePerson(trx, { id: joiner.personId, name: joiner.name, passwordHash })
  }
  else {
    await insertPerson(trx, { id: joiner.personId, email, name: joiner.name, passwordHash, isAdministrator: false, isDemo: false, at: now })
  }
}

/** Adds to the roles that the person may have got meanwhile. */
async function join({ trx, id, now }: Work, { row, programmeId, personId }: { row: InvitationRow, programmeId: string, personId: string }): Promise<void> {
  const held = (await lockMembers(trx, programmeId)).get(personId) ?? []
  await writeMembership(trx, { id: id(), programmeId, personId, roles: [...new Set([...held, ...row.roles])], changedBy: personId, at: now })
}

const OVER = {
  accepted: 'This invitation was accepted already; each works once. Sign in instead.',
  revoked: 'This invitation was taken back, or a newer one took its place.',
  expired: 'This invitation has run out. Ask whoever invited you for a new one.',
} as const

async function openInvitation({ db }: Deps, token: string): Promise<InvitationRow> {
  const row = await findInvitationByToken(db, hashToken(token))
  if (!row) throw new AppError('notFound', 'This link is not one of ours. Check that it was copied whole.')
  if (row.state !== 'open') throw new AppError('expired', OVER[row.state])
  return row
}

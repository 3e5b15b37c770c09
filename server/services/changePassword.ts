import type { Actor } from '../../shared/permissions'
import { AppError } from '../../shared/errors'
import type { Deps } from '../platform/deps'
import { findPerson, updatePerson } from '../queries/persons'
import { endOtherSessions } from '../queries/sessions'
import { proveIdentity } from './proveIdentity'
import { unitOfWork } from './unitOfWork'

export interface PasswordChange { actor: Actor, current: string, next: string, source: string }

/** Sets a new password after the present one was given; every other session of the person ends. @throws what proveIdentity throws */
export async function changePassword(deps: Deps, { actor, current, next, source }: PasswordChange): Promise<{ done: true }> {
  const person = await findPerson(deps.db, actor.personId)
  if (!person) throw new AppError('notSignedIn', 'Sign in to go on.')
  try {
    await proveIdentity(deps, { email: person.email, password: current, source })
  }
  catch (error) {
    // The session holds; only the password typed does not. 401 would send the person to the sign-in page.
    if (error instanceof AppError && error.code === 'wrongCredentials') throw new AppError('invalidInput', 'This is not the present password.', { ...error.details, field: 'current' })
    throw error
  }
  const passwordHash = await deps.passwords.hash(next)
  return unitOfWork(deps, { actor, name: 'changePassword', programmeId: null }, async ({ trx }) => {
    await updatePerson(trx, person.id, { passwordHash })
    await endOtherSessions(trx, person.id, actor.sessionId)
    return { result: { done: true as const }, subject: `person ${person.id}`, payload: {} }
  })
}

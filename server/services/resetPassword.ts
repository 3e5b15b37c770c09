import { AppError } from '../../shared/errors'
import type { Deps } from '../platform/deps'
import { hashToken } from '../platform/tokens'
import { findPerson, updatePerson, type PersonRow } from '../queries/persons'
import { endOtherSessions } from '../queries/sessions'
import { consumeToken, findToken, voidTokens, type TokenRow } from '../queries/tokens'
import { clearFailures } from './proveIdentity'
import { unitOfWork } from './unitOfWork'

/** Whose password a reset link sets, and until when it can. @throws AppError('notFound' | 'expired') */
export async function showReset(deps: Deps, { token }: { token: string }): Promise<{ email: string, expiresAt: string }> {
  const { person, row } = await openReset(deps, token)
  return { email: person.email, expiresAt: row.expiresAt.toISOString() }
}

/** Sets a new password with a reset link, once; every session of the person ends and a pause of sign-in with it. @throws AppError('notFound' | 'expired') */
export async function resetPassword(deps: Deps, { token, password, source }: { token: string, password: string, source: string }): Promise<{ done: true }> {
  const { person, row } = await openReset(deps, token)
  const passwordHash = await deps.passwords.hash(password)
  const done = await unitOfWork(deps, { actor: { personId: person.id, name: person.name }, name: 'resetPassword', programmeId: null }, async ({ trx }) => {
    if (!await consumeToken(trx, row.id)) throw used()
    await voidTokens(trx, 'resetPassword', person.id)
    await updatePerson(trx, person.id, { passwordHash })
    await endOtherSessions(trx, person.id, null)
    return { result: { done: true as const }, subject: `person ${person.id}`, payload: {} }
  })
  await clearFailures(deps, person, source)
  return done
}

async function openReset(deps: Deps, token: string): Promise<{ person: PersonRow, row: TokenRow }> {
  const row = await findToken(deps.db, 'resetPassword', hashToken(token))
  if (!row?.personId) throw new AppError('notFound', 'This link is not one of ours. Check that it was copied whole.')
  if (row.usedAt) throw used()
  if (row.isExpired) throw new AppError('expired', 'This link has run out. Ask for a new one.')
  const person = await findPerson(deps.db, row.personId)
  if (person?.state !== 'active') throw new AppError('expired', 'This account was removed. Only a new invitation opens it again.')
  return { person, row }
}

const used = () => new AppError('expired', 'This link was used, or a newer one took its place. Ask for a new one.')

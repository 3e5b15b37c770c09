import { AppError } from '../../shared/errors'
import { isDuplicate } from '../platform/database'
import type { Deps } from '../platform/deps'
import { hashToken, makeToken } from '../platform/tokens'
import { countPersons, insertPerson } from '../queries/persons'
import { consumeToken, findToken, insertToken, voidTokens } from '../queries/tokens'
import { openSession } from './openSession'
import type { SignedIn } from './signIn'
import { unitOfWork } from './unitOfWork'

const LINK_MINUTES = 24 * 60

/** A one-time link for an installation without people; the one printed before stops working. @returns null when somebody has an account */
export async function makeFirstAdministratorLink(deps: Deps): Promise<string | null> {
  const { token, hash } = makeToken()
  return unitOfWork(deps, { actor: null, name: 'makeFirstAdministratorLink', programmeId: null }, async ({ trx, id, now }) => {
    const isEmpty = await countPersons(trx) === 0
    await voidTokens(trx, 'firstAdministrator', null)
    if (isEmpty) await insertToken(trx, { id: id(), purpose: 'firstAdministrator', hash, personId: null, minutes: LINK_MINUTES, at: now })
    return { result: isEmpty ? `${deps.origin}/first/${token}` : null, subject: 'installation', payload: { made: isEmpty } }
  })
}

/** @throws AppError('notFound' | 'expired') unless the link can still be used */
export async function showFirstAdministrator(deps: Deps, { token }: { token: string }): Promise<{ expiresAt: string }> {
  const row = await openLink(deps, token)
  return { expiresAt: row.expiresAt.toISOString() }
}

export interface FirstPerson { token: string, name: string, email: string, password: string }

/** Makes the first administrator and signs them in. @throws AppError('expired') when the link was used or somebody has an account already */
export async function acceptFirstAdministrator(deps: Deps, { token, name, email, password }: FirstPerson): Promise<SignedIn> {
  const row = await openLink(deps, token)
  const passwordHash = await deps.passwords.hash(password)
  const personId = deps.ids.next()
  try {
    return await unitOfWork(deps, { actor: { personId, name }, name: 'acceptFirstAdministrator', programmeId: null }, async ({ trx, id, now }) => {
      if (!await consumeToken(trx, row.id) || await countPersons(trx) > 0) throw used()
      await insertPerson(trx, { id: personId, email, name, passwordHash, isAdministrator: true, isDemo: false, at: now })
      const sessionId = await openSession(trx, { id: id(), personId })
      return { result: { sessionId, personId }, subject: `person ${personId}`, payload: { email, name } }
    })
  }
  catch (error) {
    if (isDuplicate(error, 'email')) throw new AppError('conflict', 'This address has an account already.', { field: 'email' })
    throw error
  }
}

async function openLink({ db }: Deps, token: string) {
  const row = await findToken(db, 'firstAdministrator', hashToken(token))
  if (!row) throw new AppError('notFound', 'This link is not one of ours. Check that it was copied whole.')
  if (row.usedAt || await countPersons(db) > 0) throw used()
  if (row.isExpired) throw new AppError('expired', 'This link has run out. Start Lanthorn again: it prints a new one.')
  return row
}

const used = () => new AppError('expired', 'This link was used, or a newer one took its place. Somebody may have made the first account already.')

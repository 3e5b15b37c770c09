import type { Deps } from '../platform/deps'
import { updatePerson } from '../queries/persons'
import { openSession } from './openSession'
import { proveIdentity, type Claim } from './proveIdentity'
import { unitOfWork } from './unitOfWork'

export interface SignedIn { sessionId: string, personId: string }

/** Opens a session for whoever gives the right password. @throws what proveIdentity throws */
export async function signIn(deps: Deps, claim: Claim): Promise<SignedIn> {
  const person = await proveIdentity(deps, claim)
  // A hash made at an older cost is replaced while the password is at hand.
  const passwordHash = deps.passwords.needsRehash(person.passwordHash) ? await deps.passwords.hash(claim.password) : undefined
  return unitOfWork(deps, { actor: { personId: person.id, name: person.name }, name: 'signIn', programmeId: null }, async ({ trx, id }) => {
    if (passwordHash) await updatePerson(trx, person.id, { passwordHash })
    const sessionId = await openSession(trx, { id: id(), personId: person.id })
    return { result: { sessionId, personId: person.id }, subject: `person ${person.id}`, payload: { source: claim.source } }
  })
}

import type { Actor } from '../../shared/permissions'
import type { Deps } from '../platform/deps'
import { updatePerson } from '../queries/persons'
import { unitOfWork } from './unitOfWork'

/** Changes the name a person goes by; what they signed shows it from now on, the trail keeps both. */
export async function changeName(deps: Deps, { actor, name }: { actor: Actor, name: string }): Promise<{ done: true }> {
  return unitOfWork(deps, { actor, name: 'changeName', programmeId: null }, async ({ trx }) => {
    await updatePerson(trx, actor.personId, { name })
    return { result: { done: true as const }, subject: `person ${actor.personId}`, payload: { from: actor.name, to: name } }
  })
}

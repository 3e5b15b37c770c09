import type { Actor } from '../../shared/permissions'
import type { Preferences } from '../../shared/schemas/session'
import type { Deps } from '../platform/deps'
import { updatePerson } from '../queries/persons'
import { unitOfWork } from './unitOfWork'

/** Keeps what a person chose about look and keys, so that it is there on their next machine. */
export async function savePreferences(deps: Deps, { actor, preferences }: { actor: Actor, preferences: Preferences }): Promise<Preferences> {
  return unitOfWork(deps, { actor, name: 'savePreferences', programmeId: null }, async ({ trx }) => {
    await updatePerson(trx, actor.personId, { preferences: JSON.stringify(preferences) })
    return { result: preferences, subject: `person ${actor.personId}`, payload: preferences }
  })
}

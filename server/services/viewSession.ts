import { scopeOf, type Actor } from '../../shared/permissions'
import { DEFAULT_PREFERENCES, Preferences, type SessionView } from '../../shared/schemas/session'
import type { Deps } from '../platform/deps'
import { countChecks } from '../queries/checkCounts'
import { namedMemberships } from '../queries/memberships'
import { findPerson } from '../queries/persons'

/** Who is signed in, with what the frame shows. `programmeCode`: the programme looked at, for the counts. */
export async function viewSession({ db }: Pick<Deps, 'db'>, { actor, programmeCode }: { actor: Actor, programmeCode: string | null }): Promise<SessionView> {
  const person = await findPerson(db, actor.personId)
  if (!person) throw new Error(`The person ${actor.personId} of an open session is not there.`)
  const memberships = await namedMemberships(db, actor.personId)
  const looked = memberships.find(one => one.programmeCode === programmeCode)
  const maySeeQueue = looked !== undefined && scopeOf(actor, 'check.queue', looked.programmeId) !== 'none'
  return {
    person: { personId: person.id, name: person.name, email: person.email, isAdministrator: person.isAdministrator, isDemo: person.isDemo },
    memberships: memberships.map(({ programmeId, programmeCode: code, programmeName, roles }) => ({ programmeId, programmeCode: code, programmeName, roles })),
    preferences: readPreferences(person.preferences),
    counts: { checks: maySeeQueue ? await countChecks(db, looked.programmeId) : null },
  }
}

/** What the person chose, over the defaults; choices of an older version that no longer exist are left behind. */
export function readPreferences(text: string): Preferences {
  const stored: unknown = JSON.parse(text)
  const parsed = Preferences.partial().loose().safeParse(stored)
  if (!parsed.success) return DEFAULT_PREFERENCES
  const { theme, singleKeys, mechanismWords } = { ...DEFAULT_PREFERENCES, ...parsed.data }
  return { theme, singleKeys, mechanismWords }
}

import { DEMO_PASSWORD } from '../../../shared/demo'
import type { Actor } from '../../../shared/permissions'
import type { WorkerDeps } from '../../../server/jobs/define'
import { membershipsOf } from '../../../server/queries/people'
import { writeMembership } from '../../../server/queries/memberships'
import { insertPerson } from '../../../server/queries/persons'
import { createProgramme } from '../../../server/services/programmes'
import { unitOfWork } from '../../../server/services/unitOfWork'
import { DEMO_PEOPLE, type DemoPersonKey } from './people'

export interface Institute { programmeId: string, code: string, people: Readonly<Record<DemoPersonKey, Actor>> }

/**
 * The programme and its people. They become demo accounts, which the sign-in page lists, only when everything is loaded (openAccounts): a load that was
 * cut short can be told by that.
 */
export async function makeInstitute(deps: WorkerDeps): Promise<Institute> {
  const { programmeId, code } = await createProgramme(deps, {
    actor: null, code: 'skerry', name: 'Skerry', isDemo: true,
    description: 'An extracellular T1 agent for 3 T. Invented for the demonstration: no person, complex or number here is real.',
  })
  const passwordHash = await deps.passwords.hash(DEMO_PASSWORD)
  const ids = await unitOfWork(deps, { actor: null, name: 'loadDemo', programmeId: null }, async (work) => {
    const result: Record<string, string> = {}
    for (const one of DEMO_PEOPLE) {
      result[one.key] = work.id()
      await insertPerson(work.trx, { id: result[one.key]!, email: one.email, name: one.name, passwordHash, isAdministrator: one.isAdministrator, isDemo: false, at: work.now })
    }
    for (const one of DEMO_PEOPLE.filter(each => each.roles.length > 0)) {
      await writeMembership(work.trx, { id: work.id(), programmeId, personId: result[one.key]!, roles: one.roles, changedBy: result.yara!, at: work.now })
    }
    return { result, subject: `programme ${code}`, payload: { people: DEMO_PEOPLE.map(one => one.email) } }
  })
  const people = {} as Record<DemoPersonKey, Actor>
  for (const one of DEMO_PEOPLE) {
    const personId = ids[one.key]!
    people[one.key] = { personId, sessionId: deps.ids.next(), name: one.name, isAdministrator: one.isAdministrator, memberships: await membershipsOf(deps.db, personId) }
  }
  return { programmeId, code, people }
}

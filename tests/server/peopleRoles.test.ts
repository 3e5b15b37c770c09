import { afterAll, describe, expect, it } from 'vitest'
import type { Actor } from '../../shared/permissions'
import { findActor } from '../../server/queries/people'
import { toBinary } from '../../server/platform/ids'
import { writeMembership } from '../../server/queries/memberships'
import { listInstallationPeople, removePerson } from '../../server/services/installationPeople'
import { invite } from '../../server/services/invite'
import { listMembers } from '../../server/services/listMembers'
import { setRoles } from '../../server/services/setRoles'
import { showInvitation } from '../../server/services/acceptInvitation'
import { signIn } from '../../server/services/signIn'
import { makeAccount, nextSource, PASSWORD, refusal, signedIn, tokenMailedTo } from '../support/actors'
import { makeDeps, makePerson, makeProgramme, type TestProgramme } from '../support/factory'

const deps = makeDeps()
afterAll(() => deps.close())
const idempotency = undefined

/** A member who is signed in. */
async function member(programme: TestProgramme, roles: ('chemist' | 'lead')[]): Promise<Actor> {
  const { personId, email } = await makeAccount(deps)
  await writeMembership(deps.db, { id: deps.ids.next(), programmeId: programme.id, personId, roles, changedBy: null, at: deps.clock.now() })
  return signedIn(deps, email)
}
const eventsOf = (personId: string) => deps.db('membership_event').where({ person_id: toBinary(personId) }).orderBy('id').select('roles') as Promise<{ roles: string }[]>

describe('roles', () => {
  it('hold from the next request on, and end the sessions of whose roles changed [architecture: one transaction]', async () => {
    const programme = await makeProgramme(deps)
    const actor = await member(programme, ['chemist'])
    await setRoles(deps, { actor: programme.people.lead, programmeId: programme.id, personId: actor.personId, roles: ['physicist', 'partner'], idempotency })
    expect(await findActor(deps.db, actor.sessionId)).toBeNull()
    expect((await listMembers(deps, { actor, programmeId: programme.id })).members.find(one => one.isYou)).toMatchObject({ roles: ['physicist', 'partner'] })
    expect((await eventsOf(actor.personId)).map(one => one.roles)).toEqual(['chemist', 'physicist,partner'])
  })

  it('end with removal at once: the very next request of the removed person finds nobody', async () => {
    const programme = await makeProgramme(deps)
    const actor = await member(programme, ['chemist'])
    expect(await findActor(deps.db, actor.sessionId)).toMatchObject({ memberships: [{ roles: ['chemist'] }] })
    await setRoles(deps, { actor: programme.people.lead, programmeId: programme.id, personId: actor.personId, roles: [], idempotency })
    expect(await findActor(deps.db, actor.sessionId)).toBeNull()
    const { sessionId } = await signIn(deps, { email: await emailOf(actor), password: PASSWORD, source: nextSource() })
    expect(await findActor(deps.db, sessionId)).toMatchObject({ memberships: [] })
  })

  it('keep the session of a lead who changes their own', async () => {
    const programme = await makeProgramme(deps)
    const actor = await member(programme, ['lead'])
    await setRoles(deps, { actor, programmeId: programme.id, personId: actor.personId, roles: ['chemist'], idempotency })
    expect(await findActor(deps.db, actor.sessionId)).toMatchObject({ memberships: [{ roles: ['chemist'] }] })
  })

  it('never leave a programme without a lead', async () => {
    const programme = await makeProgramme(deps)
    const { lead } = programme.people
    for (const roles of [[], ['chemist']] as const) {
      expect(await refusal(setRoles(deps, { actor: lead, programmeId: programme.id, personId: lead.personId, roles, idempotency }))).toMatchObject({ code: 'conflict' })
    }
    await setRoles(deps, { actor: lead, programmeId: programme.id, personId: programme.people.chemist.personId, roles: ['lead'], idempotency })
    await expect(setRoles(deps, { actor: lead, programmeId: programme.id, personId: lead.personId, roles: [], idempotency })).resolves.toEqual({ done: true })
  })

  it('leave one lead when two leads remove each other at the same moment', async () => {
    for (let round = 0; round < 5; round++) {
      const programme = await makeProgramme(deps)
      const second = await member(programme, ['lead'])
      const first = programme.people.lead
      const outcomes = await Promise.allSettled([
        setRoles(deps, { actor: first, programmeId: programme.id, personId: second.personId, roles: [], idempotency }),
        setRoles(deps, { actor: second, programmeId: programme.id, personId: first.personId, roles: [], idempotency }),
      ])
      expect(outcomes.map(one => one.status).sort()).toEqual(['fulfilled', 'rejected'])
    }
  })

  it('of a person in another programme are out of reach: they answer like somebody who does not exist', async () => {
    const [mine, other] = [await makeProgramme(deps), await makeProgramme(deps)]
    const reach = (personId: string) => refusal(setRoles(deps, { actor: mine.people.lead, programmeId: mine.id, personId, roles: ['lead'], idempotency }))
    expect(await reach(other.people.chemist.personId)).toEqual(await reach(deps.ids.next()))
  })
})

describe('removal from the installation', () => {
  it('ends roles, sessions and open invitations in one go, and keeps the person in the trail', async () => {
    const administrator = await makePerson(deps, { isAdministrator: true })
    const [one, two] = [await makeProgramme(deps), await makeProgramme(deps)]
    const actor = await member(one, ['chemist'])
    const email = await emailOf(actor)
    await invite(deps, { actor: two.people.lead, email, programmeId: two.id, roles: ['chemist'], idempotency })
    const token = await tokenMailedTo(deps, email)
    await removePerson(deps, { actor: administrator, personId: actor.personId, idempotency })
    expect(await findActor(deps.db, actor.sessionId)).toBeNull()
    expect(await refusal(signIn(deps, { email, password: PASSWORD, source: nextSource() }))).toMatchObject({ code: 'wrongCredentials' })
    expect(await refusal(showInvitation(deps, { token, actor: null }))).toMatchObject({ code: 'expired' })
    expect((await eventsOf(actor.personId)).map(event => event.roles)).toEqual(['chemist', ''])
    expect((await listInstallationPeople(deps, { actor: administrator })).people.map(person => person.personId)).not.toContain(actor.personId)
    expect(await deps.db('person').where({ id: toBinary(actor.personId) })).toHaveLength(1)
  })

  it('is not for oneself, so that an installation keeps an administrator', async () => {
    const administrator = await makePerson(deps, { isAdministrator: true })
    expect(await refusal(removePerson(deps, { actor: administrator, personId: administrator.personId, idempotency }))).toMatchObject({ code: 'conflict' })
  })

  it('leaves one administrator when two remove each other at the same moment', async () => {
    const [first, second] = [await makePerson(deps, { isAdministrator: true }), await makePerson(deps, { isAdministrator: true })]
    const outcomes = await Promise.allSettled([
      removePerson(deps, { actor: first, personId: second.personId, idempotency }), removePerson(deps, { actor: second, personId: first.personId, idempotency }),
    ])
    expect(outcomes.map(one => one.status).sort()).toEqual(['fulfilled', 'rejected'])
  })
})

async function emailOf(actor: Actor): Promise<string> {
  const row = await deps.db('person').where({ id: toBinary(actor.personId) }).first('email_ci') as { email_ci: string }
  return row.email_ci
}

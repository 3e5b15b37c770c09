import { afterAll, describe, expect, it } from 'vitest'
import type { AcceptInvitation } from '../../shared/schemas/people'
import { findActor } from '../../server/queries/people'
import { findPersonByEmail } from '../../server/queries/persons'
import { toBinary } from '../../server/platform/ids'
import { acceptInvitation, showInvitation } from '../../server/services/acceptInvitation'
import { invite } from '../../server/services/invite'
import { inviteFromInstallation } from '../../server/services/inviteFromInstallation'
import { listInvitations } from '../../server/services/listMembers'
import { removePerson } from '../../server/services/installationPeople'
import { revokeInvitation } from '../../server/services/revokeInvitation'
import { makeAccount, nextSource, PASSWORD, refusal, signedIn, tokenMailedTo } from '../support/actors'
import { makeDeps, makePerson, makeProgramme, type TestProgramme } from '../support/factory'

const deps = makeDeps()
afterAll(() => deps.close())

let guest = 0
const newAddress = () => `guest${guest++}.${deps.ids.next()}@example.org`
const inviteTo = (programme: TestProgramme, email: string, roles: ('chemist' | 'physicist' | 'lead' | 'partner')[] = ['chemist']) =>
  invite(deps, { actor: programme.people.lead, email, programmeId: programme.id, roles, idempotency: undefined })
const accept = (token: string, answer: AcceptInvitation, actor: Parameters<typeof acceptInvitation>[1]['actor'] = null) => acceptInvitation(deps, { token, answer, actor, source: nextSource() })
const asNew = (name = 'Grace Guest'): AcceptInvitation => ({ as: 'newPerson', name, password: PASSWORD })

describe('an invitation', () => {
  it('makes an account with the roles it named and signs the person in [architecture: people]', async () => {
    const programme = await makeProgramme(deps)
    const email = newAddress()
    await inviteTo(programme, email, ['chemist', 'physicist'])
    const token = await tokenMailedTo(deps, email)
    expect(await showInvitation(deps, { token, actor: null })).toMatchObject({ email, roles: ['chemist', 'physicist'], knows: false, signedInAs: 'nobody' })
    const { sessionId } = await accept(token, asNew())
    expect(await findActor(deps.db, sessionId!)).toMatchObject({ name: 'Grace Guest', memberships: [{ programmeCode: programme.code, roles: ['chemist', 'physicist'] }] })
  })

  it('shows without using up: mail programs follow links', async () => {
    const programme = await makeProgramme(deps)
    const email = newAddress()
    await inviteTo(programme, email)
    const token = await tokenMailedTo(deps, email)
    await showInvitation(deps, { token, actor: null })
    await showInvitation(deps, { token, actor: null })
    await expect(accept(token, asNew())).resolves.toMatchObject({ programmeCode: programme.code })
  })

  it('keeps the token out of the database: its hash alone is stored, and no answer carries it', async () => {
    const programme = await makeProgramme(deps)
    const email = newAddress()
    const answer = await inviteTo(programme, email)
    const token = await tokenMailedTo(deps, email)
    expect(JSON.stringify(answer)).not.toContain(token)
    const tables = await Promise.all(['invitation', 'audit', 'idempotency', 'job'].map(table => deps.db(table).select('*')))
    expect(JSON.stringify(tables)).not.toContain(token)
  })

  it('works once, and says so afterwards', async () => {
    const programme = await makeProgramme(deps)
    const email = newAddress()
    await inviteTo(programme, email)
    const token = await tokenMailedTo(deps, email)
    await accept(token, asNew())
    expect(await refusal(accept(token, { as: 'existing', password: PASSWORD }))).toMatchObject({ code: 'expired' })
    expect((await refusal(showInvitation(deps, { token, actor: null }))).message).toContain('accepted already')
  })

  it('lets one of five who accept at the same moment in', async () => {
    const programme = await makeProgramme(deps)
    const email = newAddress()
    await inviteTo(programme, email)
    const token = await tokenMailedTo(deps, email)
    const outcomes = await Promise.allSettled(Array.from({ length: 5 }, (_, n) => accept(token, asNew(`Guest ${n}`))))
    expect(outcomes.filter(one => one.status === 'fulfilled')).toHaveLength(1)
    for (const one of outcomes) if (one.status === 'rejected') expect((one.reason as { code: string }).code).toMatch(/^(expired|conflict)$/)
    expect(await deps.db('person').where({ email_ci: email })).toHaveLength(1)
    expect(await deps.db('membership').where({ programme_id: toBinary(programme.id) })).toHaveLength(5)
  })

  it('runs out after seven days by the clock of the database', async () => {
    const programme = await makeProgramme(deps)
    const email = newAddress()
    const { id } = await inviteTo(programme, email)
    const [row] = await deps.db('invitation').where({ id: toBinary(id) }).select(deps.db.raw('TIMESTAMPDIFF(HOUR, NOW(6), expires_at) AS hours')) as { hours: number }[]
    expect(Number(row!.hours)).toBe(7 * 24 - 1)
    await deps.db('invitation').where({ id: toBinary(id) }).update({ expires_at: deps.db.raw('DATE_SUB(NOW(6), INTERVAL 1 SECOND)') })
    const token = await tokenMailedTo(deps, email)
    expect(await refusal(accept(token, asNew()))).toMatchObject({ code: 'expired', message: expect.stringContaining('run out') as string })
    expect((await listInvitations(deps, { programmeId: programme.id })).invitations[0]).toMatchObject({ state: 'expired' })
  })

  it('can be taken back by the programme that wrote it, and by no other', async () => {
    const programme = await makeProgramme(deps)
    const other = await makeProgramme(deps)
    const email = newAddress()
    const { id } = await inviteTo(programme, email)
    expect(await refusal(revokeInvitation(deps, { actor: other.people.lead, id, programmeId: other.id }))).toMatchObject({ code: 'notFound' })
    await revokeInvitation(deps, { actor: programme.people.lead, id, programmeId: programme.id })
    expect(await refusal(accept(await tokenMailedTo(deps, email), asNew()))).toMatchObject({ code: 'expired', message: expect.stringContaining('taken back') as string })
    expect(await refusal(revokeInvitation(deps, { actor: programme.people.lead, id, programmeId: programme.id }))).toMatchObject({ code: 'conflict' })
  })

  it('takes the place of an older one to the same address', async () => {
    const programme = await makeProgramme(deps)
    const email = newAddress()
    await inviteTo(programme, email)
    const first = await tokenMailedTo(deps, email)
    await inviteTo(programme, email, ['partner'])
    expect(await refusal(accept(first, asNew()))).toMatchObject({ code: 'expired' })
    expect(await showInvitation(deps, { token: await tokenMailedTo(deps, email), actor: null })).toMatchObject({ roles: ['partner'] })
  })

  it('goes to nobody who is a member already', async () => {
    const programme = await makeProgramme(deps)
    const { email } = await makeAccount(deps)
    await inviteTo(programme, email)
    await accept(await tokenMailedTo(deps, email), { as: 'existing', password: PASSWORD })
    expect(await refusal(inviteTo(programme, email, ['lead']))).toMatchObject({ code: 'conflict' })
  })

  it('answers the same key and request with the same invitation and one mail [idempotency]', async () => {
    const programme = await makeProgramme(deps)
    const email = newAddress()
    const once = () => invite(deps, { actor: programme.people.lead, email, programmeId: programme.id, roles: ['chemist'], idempotency: { key: `key-${email}`.slice(0, 60), request: { email } } })
    expect(await once()).toEqual(await once())
    expect(await deps.db('mail').where({ to_address: email })).toHaveLength(1)
  })
})

describe('somebody who has an account', () => {
  it('accepts with the password, and keeps the roles held elsewhere', async () => {
    const [first, second] = [await makeProgramme(deps), await makeProgramme(deps)]
    const { personId, email } = await makeAccount(deps)
    for (const programme of [first, second]) {
      await inviteTo(programme, email)
      await accept(await tokenMailedTo(deps, email), { as: 'existing', password: PASSWORD })
    }
    const actor = await signedIn(deps, email)
    expect(actor.personId).toBe(personId)
    expect(actor.memberships.map(one => one.programmeCode).sort()).toEqual([first.code, second.code].sort())
  })

  it('cannot be taken over by whoever holds the link: neither a new password nor a wrong one opens the account', async () => {
    const programme = await makeProgramme(deps)
    const { email } = await makeAccount(deps)
    await inviteTo(programme, email)
    const token = await tokenMailedTo(deps, email)
    expect(await refusal(accept(token, asNew('Mallory')))).toMatchObject({ code: 'conflict' })
    expect(await refusal(accept(token, { as: 'existing', password: 'wrong' }))).toMatchObject({ code: 'wrongCredentials' })
    expect(await showInvitation(deps, { token, actor: null })).toMatchObject({ knows: true })
  })

  it('accepts by being signed in; somebody else who is signed in does not', async () => {
    const programme = await makeProgramme(deps)
    const { email } = await makeAccount(deps)
    await inviteTo(programme, email)
    const token = await tokenMailedTo(deps, email)
    const stranger = await signedIn(deps, (await makeAccount(deps)).email)
    expect(await showInvitation(deps, { token, actor: stranger })).toMatchObject({ signedInAs: 'other' })
    expect(await refusal(accept(token, { as: 'signedIn' }, stranger))).toMatchObject({ code: 'notAllowed' })
    expect(await accept(token, { as: 'signedIn' }, await signedIn(deps, email))).toEqual({ sessionId: null, programmeCode: programme.code })
  })
})

describe('the administrator', () => {
  it('invites the lead of a programme, and another administrator, with no roles beside', async () => {
    const administrator = await makePerson(deps, { isAdministrator: true })
    const programme = await makeProgramme(deps)
    const [lead, colleague] = [newAddress(), newAddress()]
    await inviteFromInstallation(deps, { actor: administrator, wish: { as: 'lead', email: lead, programmeCode: programme.code }, idempotency: undefined })
    await inviteFromInstallation(deps, { actor: administrator, wish: { as: 'administrator', email: colleague }, idempotency: undefined })
    const { sessionId } = await accept(await tokenMailedTo(deps, lead), asNew())
    expect(await findActor(deps.db, sessionId!)).toMatchObject({ isAdministrator: false, memberships: [{ roles: ['lead'] }] })
    const second = await accept(await tokenMailedTo(deps, colleague), asNew())
    expect(await findActor(deps.db, second.sessionId!)).toMatchObject({ isAdministrator: true, memberships: [] })
  })

  it('opens a removed account again by invitation only: new password, no administrator any more, nothing of before', async () => {
    const administrator = await makePerson(deps, { isAdministrator: true })
    const programme = await makeProgramme(deps)
    const { personId, email } = await makeAccount(deps, { isAdministrator: true })
    await removePerson(deps, { actor: administrator, personId, idempotency: undefined })
    await inviteTo(programme, email, ['partner'])
    const token = await tokenMailedTo(deps, email)
    expect(await showInvitation(deps, { token, actor: null })).toMatchObject({ knows: false })
    const { sessionId } = await accept(token, { as: 'newPerson', name: 'Back Again', password: 'a different password' })
    expect(await findActor(deps.db, sessionId!)).toMatchObject({ personId, name: 'Back Again', isAdministrator: false, memberships: [{ roles: ['partner'] }] })
    expect(await findPersonByEmail(deps.db, email)).toMatchObject({ state: 'active' })
  })
})

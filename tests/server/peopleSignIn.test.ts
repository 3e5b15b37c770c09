import { afterAll, describe, expect, it } from 'vitest'
import { findActor } from '../../server/queries/people'
import { changePassword } from '../../server/services/changePassword'
import { endSession } from '../../server/services/endSession'
import { listOwnSessions } from '../../server/services/listOwnSessions'
import { signIn } from '../../server/services/signIn'
import { ACCOUNT_RULE, pauseAfter, secondsToWait, SOURCE_RULE } from '../../server/services/signInLimits'
import { toBinary } from '../../server/platform/ids'
import { makeAccount, nextSource, PASSWORD, refusal, signedIn } from '../support/actors'
import { makeDeps } from '../support/factory'

const deps = makeDeps()
afterAll(() => deps.close())
const NEW_PASSWORD = 'another long password'

describe('sign-in', () => {
  it('opens a session that names its person, and no other [product: people]', async () => {
    const { personId, email } = await makeAccount(deps)
    const actor = await signedIn(deps, email)
    expect(actor).toMatchObject({ personId, isAdministrator: false, memberships: [] })
    expect(await findActor(deps.db, deps.ids.next())).toBeNull()
  })

  it('answers an unknown address and a wrong password in the same words', async () => {
    const { email } = await makeAccount(deps)
    const wrong = await refusal(signIn(deps, { email, password: 'not the password', source: nextSource() }))
    const unknown = await refusal(signIn(deps, { email: `nobody.${deps.ids.next()}@example.org`, password: 'not the password', source: nextSource() }))
    expect(unknown).toEqual(wrong)
    expect(wrong.code).toBe('wrongCredentials')
  })

  it('verifies a password of the same cost for an address nobody has: time tells nothing', async () => {
    const verified: string[] = []
    const watched = { ...deps, passwords: { ...deps.passwords, verify: (hash: string, plain: string) => { verified.push(hash); return deps.passwords.verify(hash, plain) } } }
    await refusal(signIn(watched, { email: `nobody.${deps.ids.next()}@example.org`, password: 'x', source: nextSource() }))
    expect(verified).toHaveLength(1)
    expect(deps.passwords.needsRehash(verified[0]!)).toBe(false)
  })

  it('does not let a removed person in, with the words of a wrong password', async () => {
    const { personId, email } = await makeAccount(deps)
    await deps.db('person').where({ id: toBinary(personId) }).update({ state: 'removed' })
    expect(await refusal(signIn(deps, { email, password: PASSWORD, source: nextSource() }))).toMatchObject({ code: 'wrongCredentials' })
  })

  it('ends a session on sign-out, and refuses to end that of somebody else as if it were not there', async () => {
    const { email } = await makeAccount(deps)
    const actor = await signedIn(deps, email)
    const stranger = await signedIn(deps, (await makeAccount(deps)).email)
    expect(await refusal(endSession(deps, { actor: stranger, sessionId: actor.sessionId }))).toMatchObject({ code: 'notFound' })
    await endSession(deps, { actor, sessionId: actor.sessionId })
    expect(await findActor(deps.db, actor.sessionId)).toBeNull()
  })

  it('lets a session run out by the clock of the database', async () => {
    const actor = await signedIn(deps, (await makeAccount(deps)).email)
    await deps.db('session').where({ id: toBinary(actor.sessionId) }).update({ expires_at: deps.db.raw('DATE_SUB(NOW(6), INTERVAL 1 SECOND)') })
    expect(await findActor(deps.db, actor.sessionId)).toBeNull()
  })
})

describe('pauses after failures', () => {
  it('doubles from 15 s to 15 min after five free failures [closed form]', () => {
    expect([4, 5, 6, 7, 10, 11, 12, 400].map(n => pauseAfter(n, ACCOUNT_RULE))).toEqual([0, 15, 30, 60, 480, 900, 900, 900])
    expect(secondsToWait({ count: 6, sinceLast_s: 10.4 }, ACCOUNT_RULE)).toBe(20)
    expect(secondsToWait({ count: 6, sinceLast_s: 31 }, ACCOUNT_RULE)).toBe(0)
  })

  it('pauses an account for everybody, right password included, and says for how many seconds', async () => {
    const { email } = await makeAccount(deps)
    for (let n = 0; n < ACCOUNT_RULE.free; n++) await refusal(signIn(deps, { email, password: 'wrong', source: nextSource() }))
    const refused = await refusal(signIn(deps, { email, password: PASSWORD, source: nextSource() }))
    expect(refused).toMatchObject({ code: 'lockedOut' })
    expect(refused.data.retryAfter_s).toBeGreaterThan(0)
    expect(refused.data.retryAfter_s).toBeLessThanOrEqual(15)
    expect(refused.message).toContain(`${String(refused.data.retryAfter_s)} s`)
  })

  it('pauses an unknown address alike, so that a pause does not tell who has an account', async () => {
    const email = `nobody.${deps.ids.next()}@example.org`
    for (let n = 0; n < ACCOUNT_RULE.free; n++) await refusal(signIn(deps, { email, password: 'wrong', source: nextSource() }))
    expect(await refusal(signIn(deps, { email, password: 'wrong', source: nextSource() }))).toMatchObject({ code: 'lockedOut' })
  })

  it('looks at no more than the free passwords when forty are tried at once', async () => {
    const { email } = await makeAccount(deps)
    let looked = 0
    const watched = { ...deps, passwords: { ...deps.passwords, verify: async (hash: string, plain: string) => { looked++; return deps.passwords.verify(hash, plain) } } }
    await Promise.all(Array.from({ length: 40 }, () => refusal(signIn(watched, { email, password: 'wrong', source: nextSource() }))))
    expect(looked).toBeLessThanOrEqual(ACCOUNT_RULE.free)
  })

  it('forgets the failures of an account once it signs in', async () => {
    const { email } = await makeAccount(deps)
    for (let n = 0; n < ACCOUNT_RULE.free - 1; n++) await refusal(signIn(deps, { email, password: 'wrong', source: nextSource() }))
    await signedIn(deps, email)
    expect(await refusal(signIn(deps, { email, password: 'wrong', source: nextSource() }))).toMatchObject({ code: 'wrongCredentials', data: { triesLeft: ACCOUNT_RULE.free - 1 } })
  })

  it('pauses one source that tries many accounts, and not its neighbours', async () => {
    const source = nextSource()
    const { email } = await makeAccount(deps)
    for (let n = 0; n < SOURCE_RULE.free; n++) await refusal(signIn(deps, { email: `nobody${n}.${deps.ids.next()}@example.org`, password: 'wrong', source }))
    expect(await refusal(signIn(deps, { email, password: PASSWORD, source }))).toMatchObject({ code: 'lockedOut' })
    await expect(signedIn(deps, email)).resolves.toMatchObject({ isAdministrator: false })
  })

  it('does not clear a source by signing in to one account of its own', async () => {
    const source = nextSource()
    const { email } = await makeAccount(deps)
    for (let n = 0; n < SOURCE_RULE.free - 1; n++) await refusal(signIn(deps, { email: `nobody${n}.${deps.ids.next()}@example.org`, password: 'wrong', source }))
    await signIn(deps, { email, password: PASSWORD, source })
    await refusal(signIn(deps, { email: `nobody.${deps.ids.next()}@example.org`, password: 'wrong', source }))
    expect(await refusal(signIn(deps, { email, password: PASSWORD, source }))).toMatchObject({ code: 'lockedOut' })
  })
})

describe('change of password', () => {
  it('ends every other session and keeps this one', async () => {
    const { email } = await makeAccount(deps)
    const here = await signedIn(deps, email)
    const elsewhere = await signedIn(deps, email)
    expect((await listOwnSessions(deps, { actor: here })).sessions.map(one => one.isThis).sort()).toEqual([false, true])
    await changePassword(deps, { actor: here, current: PASSWORD, next: NEW_PASSWORD, source: nextSource() })
    expect(await findActor(deps.db, here.sessionId)).not.toBeNull()
    expect(await findActor(deps.db, elsewhere.sessionId)).toBeNull()
    await expect(signedIn(deps, email, NEW_PASSWORD)).resolves.toBeDefined()
    expect(await refusal(signIn(deps, { email, password: PASSWORD, source: nextSource() }))).toMatchObject({ code: 'wrongCredentials' })
  })

  it('does not bring back a session that was ended before', async () => {
    const { email } = await makeAccount(deps)
    const here = await signedIn(deps, email)
    const ended = await signedIn(deps, email)
    await endSession(deps, { actor: here, sessionId: ended.sessionId })
    await changePassword(deps, { actor: here, current: PASSWORD, next: NEW_PASSWORD, source: nextSource() })
    expect(await findActor(deps.db, ended.sessionId)).toBeNull()
  })

  it('wants the present password, says which field is wrong, and counts the try', async () => {
    const { email } = await makeAccount(deps)
    const actor = await signedIn(deps, email)
    expect(await refusal(changePassword(deps, { actor, current: 'wrong', next: NEW_PASSWORD, source: nextSource() }))).toMatchObject({ code: 'invalidInput', data: { triesLeft: ACCOUNT_RULE.free - 1 } })
    expect(await findActor(deps.db, actor.sessionId)).not.toBeNull()
  })

  it('keeps no password and no hash of one in the trail', async () => {
    const { personId, email } = await makeAccount(deps)
    const actor = await signedIn(deps, email)
    await changePassword(deps, { actor, current: PASSWORD, next: NEW_PASSWORD, source: nextSource() })
    const rows = await deps.db('audit').where({ person_id: toBinary(personId), command: 'changePassword' }).select('payload') as { payload: string }[]
    expect(rows.map(row => row.payload)).toEqual(['{}'])
    expect(await deps.db('idempotency').where({ person_id: toBinary(personId) })).toEqual([])
  })
})

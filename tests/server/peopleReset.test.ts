import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { JOBS } from '../../server/jobs/index'
import { drainJobs } from '../../server/jobs/runJobs'
import { findActor } from '../../server/queries/people'
import { findPersonByEmail, updatePerson } from '../../server/queries/persons'
import { askReset } from '../../server/services/askReset'
import { listMail } from '../../server/services/listMail'
import { resetPassword, showReset } from '../../server/services/resetPassword'
import { sendResetLink } from '../../server/services/sendResetLink'
import { signIn } from '../../server/services/signIn'
import { ACCOUNT_RULE } from '../../server/services/signInLimits'
import { makeAccount, nextSource, PASSWORD, refusal, signedIn, tokenMailedTo } from '../support/actors'
import { makeOwnDeps, type OwnDeps } from '../support/ownSchema'

let deps: OwnDeps
beforeAll(async () => { deps = await makeOwnDeps() })
afterAll(() => deps.close())
const NEW_PASSWORD = 'chosen after the mail'
const source = nextSource()

/** Asks and lets the worker answer, as the two processes do. */
async function askAndSend(email: string): Promise<string> {
  deps.clock.advance(10 * 60_000)
  await askReset(deps, { email, source })
  await drainJobs(deps, JOBS)
  return tokenMailedTo(deps, email)
}

describe('password reset', () => {
  it('sets a password once with the mailed link, and ends every session', async () => {
    const { email } = await makeAccount(deps)
    const before = await signedIn(deps, email)
    const token = await askAndSend(email)
    expect(await showReset(deps, { token })).toMatchObject({ email })
    await resetPassword(deps, { token, password: NEW_PASSWORD, source })
    expect(await findActor(deps.db, before.sessionId)).toBeNull()
    await expect(signedIn(deps, email, NEW_PASSWORD)).resolves.toBeDefined()
    expect(await refusal(resetPassword(deps, { token, password: 'once more, please', source }))).toMatchObject({ code: 'expired' })
    expect(await refusal(showReset(deps, { token }))).toMatchObject({ code: 'expired' })
  })

  it('lets one of four who use the link at the same moment through', async () => {
    const { email } = await makeAccount(deps)
    const token = await askAndSend(email)
    const outcomes = await Promise.allSettled(Array.from({ length: 4 }, (_, n) => resetPassword(deps, { token, password: `new password no. ${n}`, source })))
    expect(outcomes.filter(one => one.status === 'fulfilled')).toHaveLength(1)
  })

  it('writes a mail for an account and none for an address without one; the asker cannot tell', async () => {
    const nobody = `nobody.${deps.ids.next()}@example.org`
    const { email } = await makeAccount(deps)
    expect(await askReset(deps, { email: nobody, source })).toEqual(await askReset(deps, { email, source }))
    await drainJobs(deps, JOBS)
    expect(await deps.db('mail').where({ to_address: nobody })).toHaveLength(0)
    expect(await deps.db('mail').where({ to_address: email })).toHaveLength(1)
  })

  it('sends one link in five minutes however often it is asked for', async () => {
    const { email } = await makeAccount(deps)
    deps.clock.advance(10 * 60_000)
    for (let n = 0; n < 4; n++) await askReset(deps, { email, source })
    await drainJobs(deps, JOBS)
    expect(await deps.db('mail').where({ to_address: email })).toHaveLength(1)
  })

  it('makes older links void when a newer one is sent', async () => {
    const { email } = await makeAccount(deps)
    const older = await askAndSend(email)
    await askAndSend(email)
    expect(await refusal(resetPassword(deps, { token: older, password: NEW_PASSWORD, source }))).toMatchObject({ code: 'expired' })
  })

  it('runs out after an hour by the clock of the database', async () => {
    const { email } = await makeAccount(deps)
    const token = await askAndSend(email)
    await deps.db('one_time_token').whereNull('used_at').update({ expires_at: deps.db.raw('DATE_SUB(NOW(6), INTERVAL 1 SECOND)') })
    expect(await refusal(resetPassword(deps, { token, password: NEW_PASSWORD, source }))).toMatchObject({ code: 'expired', message: expect.stringContaining('run out') as string })
  })

  it('does not open a removed account', async () => {
    const { personId, email } = await makeAccount(deps)
    const token = await askAndSend(email)
    await updatePerson(deps.db, personId, { state: 'removed' })
    expect(await refusal(resetPassword(deps, { token, password: NEW_PASSWORD, source }))).toMatchObject({ code: 'expired' })
    expect((await findPersonByEmail(deps.db, email))!.state).toBe('removed')
  })

  it('ends a pause of sign-in', async () => {
    const { email } = await makeAccount(deps)
    for (let n = 0; n < ACCOUNT_RULE.free; n++) await refusal(signIn(deps, { email, password: 'wrong', source: nextSource() }))
    await resetPassword(deps, { token: await askAndSend(email), password: NEW_PASSWORD, source: nextSource() })
    await expect(signedIn(deps, email, NEW_PASSWORD)).resolves.toBeDefined()
  })

  it('is done once by a worker that lost its lease: the link of a stale fence is never stored', async () => {
    const { email } = await makeAccount(deps)
    await expect(sendResetLink(deps, { email, job: { id: deps.ids.next(), fence: 1 } })).rejects.toThrow('lease')
    expect(await deps.db('mail').where({ to_address: email })).toHaveLength(0)
  })

  it('refuses a link of somebody else\'s making like one that never was', async () => {
    expect(await refusal(showReset(deps, { token: 'A'.repeat(43) }))).toMatchObject({ code: 'notFound' })
  })
})

describe('the list of mail', () => {
  it('hides links behind a real mail server, so that an administrator cannot use them, and shows them when mail is caught here', async () => {
    const { email } = await makeAccount(deps)
    const token = await askAndSend(email)
    const find = async (isCaught: boolean) => (await listMail(deps, { page: 0, isCaught })).mail.find(mail => mail.to === email)!
    expect((await find(false)).body).not.toContain(token)
    expect((await find(false)).body).toContain('/reset/[in the mail only]')
    expect((await find(true)).body).toContain(token)
    expect(await find(true)).toMatchObject({ sent: true, attempts: 1 })
  })

  it('never shows a password, for none is ever mailed', async () => {
    const bodies = await deps.db('mail').select('body') as { body: string }[]
    for (const { body } of bodies) expect(body).not.toContain(PASSWORD)
  })
})

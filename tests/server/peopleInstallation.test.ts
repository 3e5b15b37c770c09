import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { findActor } from '../../server/queries/people'
import { acceptFirstAdministrator, makeFirstAdministratorLink, showFirstAdministrator } from '../../server/services/firstAdministrator'
import { listDemoAccounts } from '../../server/services/listDemoAccounts'
import { createProgramme, listProgrammes } from '../../server/services/programmes'
import { changeSettings, showSettings } from '../../server/services/programmeSettings'
import { resumeParkedJob, systemState } from '../../server/services/systemState'
import { toBinary } from '../../server/platform/ids'
import { PASSWORD, refusal } from '../support/actors'
import { makeDeps, makePerson, makeProgramme } from '../support/factory'
import { makeOwnDeps, type OwnDeps } from '../support/ownSchema'

const shared = makeDeps()
afterAll(() => shared.close())

describe('the first administrator', () => {
  let deps: OwnDeps
  beforeAll(async () => { deps = await makeOwnDeps() })
  afterAll(() => deps.close())
  const tokenOf = (link: string | null) => /\/first\/([\w-]{43})$/.exec(link ?? '')![1]!
  const person = { name: 'First Person', email: 'first@example.org', password: PASSWORD }

  it('comes by a link that is printed while nobody has an account; each start makes the one before void', async () => {
    const older = tokenOf(await makeFirstAdministratorLink(deps))
    const token = tokenOf(await makeFirstAdministratorLink(deps))
    expect(await refusal(showFirstAdministrator(deps, { token: older }))).toMatchObject({ code: 'expired' })
    await expect(showFirstAdministrator(deps, { token })).resolves.toHaveProperty('expiresAt')
    const outcomes = await Promise.allSettled(['a', 'b', 'c'].map(one => acceptFirstAdministrator(deps, { ...person, token, email: `${one}@example.org` })))
    const [winner, ...others] = outcomes.filter(one => one.status === 'fulfilled')
    expect(others).toEqual([])
    expect(await findActor(deps.db, winner!.value.sessionId)).toMatchObject({ isAdministrator: true, name: 'First Person' })
    expect(await makeFirstAdministratorLink(deps)).toBeNull()
    expect(await refusal(acceptFirstAdministrator(deps, { ...person, token }))).toMatchObject({ code: 'expired' })
  })

  it('sees no demo accounts where none were loaded', async () => {
    expect(await listDemoAccounts(deps)).toEqual({ password: '', accounts: [] })
  })
})

describe('programmes', () => {
  it('are opened by code once; the second of the same code is told so', async () => {
    const actor = await makePerson(shared, { isAdministrator: true })
    const code = `c${shared.ids.next().slice(-10)}`
    await createProgramme(shared, { actor, code, name: 'North', description: '' })
    expect(await refusal(createProgramme(shared, { actor, code, name: 'South', description: '' }))).toMatchObject({ code: 'conflict' })
    expect((await listProgrammes(shared)).programmes.find(one => one.code === code)).toMatchObject({ name: 'North', members: 0, leads: [] })
  })

  it('keep their code when name, description and what partners see change', async () => {
    const { id, code, people } = await makeProgramme(shared)
    await changeSettings(shared, { actor: people.lead, programmeId: id, change: { name: 'Renamed', description: 'Why', partnerSeesRawFiles: true }, idempotency: undefined })
    expect(await showSettings(shared, { programmeId: id })).toEqual({ code, name: 'Renamed', description: 'Why', partnerSeesRawFiles: true })
  })
})

describe('the system page', () => {
  it('counts parked jobs and puts one back in the queue, once', async () => {
    const actor = await makePerson(shared, { isAdministrator: true })
    const jobId = shared.ids.next()
    await shared.db('job').insert({
      id: toBinary(jobId), kind: 'test.parked', dedupe_key: jobId, payload: '{}', state: 'parked', attempts: 3, max_attempts: 3, error: 'It broke.', created_at: shared.clock.now(),
      run_after: shared.db.raw('DATE_ADD(NOW(6), INTERVAL 1 DAY)'),
    })
    const state = await systemState(shared)
    expect(state.parked.find(one => one.id === jobId)).toMatchObject({ kind: 'test.parked', error: 'It broke.', attempts: 3 })
    expect(state.jobs.ready).toBeGreaterThanOrEqual(state.jobs.due)
    expect(state.database.version).toMatch(/MariaDB/)
    expect(state.database.migrations).toBeGreaterThan(0)
    await resumeParkedJob(shared, { actor, jobId })
    expect(await refusal(resumeParkedJob(shared, { actor, jobId }))).toMatchObject({ code: 'conflict' })
    expect(await shared.db('job').where({ id: toBinary(jobId) }).first('state', 'attempts')).toEqual({ state: 'ready', attempts: 0 })
    await shared.db('job').where({ id: toBinary(jobId) }).delete()
  })
})

import { afterAll, describe, expect, it } from 'vitest'
import { toBinary } from '../../server/platform/ids'
import { readEvidence } from '../../server/queries/evidence'
import { correctConditions } from '../../server/services/correctConditions'
import { correctRecord } from '../../server/services/correctRecord'
import { signEvidence } from '../../server/services/signEvidence'
import { listQueue } from '../../server/services/showCheck'
import { fitVersions } from '../../server/queries/fits'
import { refusal } from '../support/actors'
import { fittedSeries, mailsOf, stepsOf } from '../support/checks'
import { makeDeps, makePerson, type TestProgramme } from '../support/factory'
import { rateLawEntry } from '../support/publishedRecords'
import { enter, register, SOURCE } from '../support/registry'
import { toyKind } from '../support/toyKind'
import { runJobs } from '../support/uploads'

const deps = makeDeps({ kinds: { [toyKind.kind]: toyKind } })
afterAll(() => deps.close())
const BUBBLE = { tubeNo: 4, pointIndex: 2, reason: 'Air bubble seen in the last reading.' }
const physicistOf = (programme: TestProgramme) => makePerson(deps, { programmeId: programme.id, roles: ['chemist', 'physicist'] })
const jobsOf = (programme: TestProgramme) => deps.db('job').where({ programme_id: toBinary(programme.id), kind: 'ground.notice' }).pluck('dedupe_key') as Promise<string[]>

describe('who may sign [product: people; architecture: people]', () => {
  it('not whoever uploaded the series, whatever their roles; the page says why beforehand', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    const both = { ...way.chemist, memberships: [{ ...way.chemist.memberships[0]!, roles: ['chemist', 'physicist'] as const }] }
    expect(await refusal(way.sign(way.fitId, 1, both))).toMatchObject({ code: 'notAllowed', message: 'You entered this yourself; somebody else signs it.' })
    expect((await way.show(way.fitId, both)).signingBarred).toBe('You entered this yourself; somebody else signs it.')
    expect((await way.show(way.fitId)).signingBarred).toBeNull()
  })

  it('not whoever corrected its conditions, nor the uploader of what was corrected', async () => {
    const way = await fittedSeries(deps)
    const corrector = await physicistOf(way.programme)
    const { id } = await correctConditions(deps, { actor: corrector, programmeId: way.programme.id, seriesId: way.seriesId, request: { conditions: { temperature_K: 298.15 }, tubes: [], reason: 'The room was not heated.' } })
    await runJobs(deps, way.programme)
    const fitId = (await fitVersions(deps.db, way.programme.id, id))[0]!.id
    await way.submit(fitId)
    expect((await refusal(way.sign(fitId, 1, corrector))).code).toBe('notAllowed')
    expect((await refusal(way.sign(fitId, 1, way.chemist))).code).toBe('notAllowed')
    expect(await way.sign(fitId)).toMatchObject({ state: 'signed' })
  })

  it('not whoever typed any version of a record or of a batch', async () => {
    const way = await fittedSeries(deps)
    const { programme, chemist } = way
    const { id } = await enter(deps, programme, { agent: 'TS-01', kind: 'rateLaw', entry: rateLawEntry({ k1_per_M_s: { value: 5.8 } }) })
    const typist = await physicistOf(programme)
    const second = await correctRecord(deps, { actor: typist, programmeId: programme.id, recordId: id, body: { basedOn: 1, entry: rateLawEntry({ k1_per_M_s: { value: 0.58 } }), source: SOURCE, lot: null, reason: 'a digit was transposed' } })
    const record = stepsOf(deps, programme, 'record')
    await record.submit(second.id)
    for (const actor of [chemist, typist]) expect((await refusal(record.sign(second.id, 1, actor))).code).toBe('notAllowed')
    expect(await record.sign(second.id)).toMatchObject({ state: 'signed' })

    const made = await register(deps, programme, { code: 'TS-02', freeMetal: { kind: '<', value_frac: 0.0005, se_frac: null, method: 'xylenolOrange', detectionLimit_frac: 0.0005 } })
    const batch = stepsOf(deps, programme, 'batchVersion')
    await batch.submit(made.batchVersionId)
    expect((await refusal(batch.sign(made.batchVersionId, 1, chemist))).code).toBe('notAllowed')
    expect(await batch.sign(made.batchVersionId)).toMatchObject({ state: 'signed' })
  })

  it('whoever left points out may sign, and the uploader is told what, by whom and why', async () => {
    const way = await fittedSeries(deps, { noise: 0.05 })
    await way.submit(way.fitId)
    const second = await way.refit({ exclusions: [BUBBLE] })
    expect((await way.sign(second, 0)).state).not.toBe('waiting')
    const mail = (await mailsOf(deps, way.programme)).at(-1)!
    expect(mail.to).toBe(`${way.chemist.personId}@example.org`)
    expect(mail.body).toContain(`- tube 4, point 3, by ${way.physicist.name}: ${BUBBLE.reason}`)
  })
})

describe('a version made while checking', () => {
  it('takes the place of the one that waits when it is signed, as steps of the same table', async () => {
    const way = await fittedSeries(deps, { noise: 0.05 })
    await way.submit(way.fitId)
    const second = await way.refit({ modelId: 'toy.drift' })
    expect((await way.show(second)).takesPlaceOf).toBe(1)
    expect(await way.sign(second, 0)).toEqual({ state: 'signed', seq: 2 })
    expect((await way.show(second)).events.map(event => event.event)).toEqual(['waiting', 'signed'])
    expect((await way.show(way.fitId)).events.map(event => [event.event, event.comment])).toEqual([['waiting', ''], ['recalled', 'Version 2 took its place.']])
  })

  it('can be returned the same way', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    const second = await way.refit({ modelId: 'toy.drift' })
    expect(await way.giveBack(second, 0)).toEqual({ state: 'returned', seq: 2 })
    expect(await listQueue(deps, { actor: way.physicist, programmeId: way.programme.id })).toEqual([])
  })

  it('stays a draft where nothing waits, where a newer one exists, and where its author made it and has not sent it', async () => {
    const way = await fittedSeries(deps)
    const unsent = await way.refit()
    expect((await refusal(way.sign(unsent, 0))).code).toBe('conflict')
    await way.submit(unsent)
    const third = await way.refit()
    const fourth = await way.refit({}, way.chemist)
    expect(await refusal(way.sign(third, 0))).toMatchObject({ code: 'conflict', message: 'Version 4 is newer; send that one.' })
    expect((await refusal(way.sign(fourth, 0))).code).toBe('conflict')
    expect((await way.show(fourth)).takesPlaceOf).toBeNull()
    expect((await way.show(unsent)).state).toBe('waiting')
  })

  it('and the one it was made of, signed by two people at once: one signature stands, the other is a conflict', async () => {
    const way = await fittedSeries(deps, { noise: 0.05 })
    const other = await physicistOf(way.programme)
    await way.submit(way.fitId)
    const second = await way.refit({ modelId: 'toy.drift' })
    const outcomes = await Promise.allSettled([way.sign(way.fitId, 1), way.sign(second, 0, other)])
    expect(outcomes.map(one => one.status).sort()).toEqual(['fulfilled', 'rejected'])
    const states = [(await way.show(way.fitId)).state, (await way.show(second)).state]
    expect(states.filter(state => state === 'signed')).toHaveLength(1)
  })
})

describe('two signatures [product: check 4]', () => {
  async function waitingWithHalfOut() {
    const way = await fittedSeries(deps)
    const out = (tubeNo: number, pointIndex: number) => ({ tubeNo, pointIndex, reason: 'Spilled while it was read.' })
    const fitId = await way.refit({ exclusions: [out(1, 0), out(2, 0), out(3, 0)] })
    await way.submit(fitId)
    return { ...way, fitId }
  }

  it('are asked for above a fifth of the points; the first does not yet count, the second is somebody else\'s', async () => {
    const way = await waitingWithHalfOut()
    expect((await way.show(way.fitId)).secondSignature).toBe('3 of 12 points are left out, more than a fifth')
    expect(await way.sign(way.fitId)).toEqual({ state: 'firstSigned', seq: 2 })
    expect(await readEvidence(deps.db, way.programme.id, 'signed')).toEqual([])
    expect(await jobsOf(way.programme)).toEqual([])
    expect(await listQueue(deps, { actor: way.physicist, programmeId: way.programme.id })).toMatchObject([{ state: 'firstSigned' }])
    expect(await refusal(way.sign(way.fitId, 2))).toMatchObject({ code: 'notAllowed', message: expect.stringContaining('somebody else\'s') })
    expect((await way.show(way.fitId)).signingBarred).toContain('somebody else\'s')
    const other = await physicistOf(way.programme)
    expect((await way.show(way.fitId, other)).signingBarred).toBeNull()
    expect(await way.sign(way.fitId, 2, other)).toEqual({ state: 'signed', seq: 3 })
    expect(await readEvidence(deps.db, way.programme.id, 'signed')).toHaveLength(1)
  })

  it('the second can return instead', async () => {
    const way = await waitingWithHalfOut()
    await way.sign(way.fitId)
    expect(await way.giveBack(way.fitId, 2, 'Too much is left out of this.', await physicistOf(way.programme))).toEqual({ state: 'returned', seq: 3 })
  })

  it('are not asked of a record', async () => {
    const way = await fittedSeries(deps)
    const { id } = await enter(deps, way.programme, { agent: 'TS-01', kind: 'rateLaw', entry: rateLawEntry({ k1_per_M_s: { value: 1 } }) })
    const record = stepsOf(deps, way.programme, 'record')
    await record.submit(id)
    expect(await record.sign(id)).toEqual({ state: 'signed', seq: 2 })
  })
})

describe('two people at once [product: what must stay true]', () => {
  it('one signature is stored; the other person hears who and when', async () => {
    const way = await fittedSeries(deps)
    const other = await physicistOf(way.programme)
    await way.submit(way.fitId)
    const outcomes = await Promise.allSettled([way.sign(way.fitId), way.sign(way.fitId, 1, other)])
    const won = outcomes.findIndex(one => one.status === 'fulfilled')
    const lost = outcomes[1 - won] as PromiseRejectedResult
    const winner = [way.physicist, other][won]!
    expect(lost.reason).toMatchObject({ code: 'conflict', message: expect.stringContaining(`${winner.name} signed it before you`), details: { data: { personName: winner.name, at: deps.clock.now().toISOString(), event: 'signed', seq: 2 } } })
    expect((await way.show(way.fitId)).events).toHaveLength(2)
  })

  it('a signature against a return: the later one meets the earlier', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    await way.giveBack(way.fitId)
    expect(await refusal(way.sign(way.fitId, 1))).toMatchObject({ code: 'conflict', message: expect.stringContaining(`${way.physicist.name} returned it before you`) })
  })

  it('a command that is sent again with its key is answered again and signs once', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    const input = { actor: way.physicist, programmeId: way.programme.id, kind: 'fit' as const, id: way.fitId, expectedSeq: 1, comment: '', idempotency: { key: deps.ids.next(), request: { seq: 1 } } }
    const [first, again] = [await signEvidence(deps, input), await signEvidence(deps, input)]
    expect(again).toEqual(first)
    expect((await way.show(way.fitId)).events).toHaveLength(2)
  })
})

describe('the map after a signature', () => {
  it('is looked at again when a signature comes and when it is taken back; the number counts only between', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    await way.sign(way.fitId)
    expect(await readEvidence(deps.db, way.programme.id, 'signed')).toHaveLength(1)
    await way.withdraw(way.fitId)
    expect(await readEvidence(deps.db, way.programme.id, 'signed')).toEqual([])
    expect((await jobsOf(way.programme)).sort()).toEqual([`ground:${way.fitId}:2`, `ground:${way.fitId}:3`])
    expect((await mailsOf(deps, way.programme)).map(mail => mail.template)).toEqual(['check.signed', 'check.withdrawn'])
  })
})

import { afterAll, describe, expect, it } from 'vitest'
import type { CheckEvent, CheckState } from '../../shared/checks/transitions'
import { toBinary } from '../../server/platform/ids'
import { listQueue } from '../../server/services/showCheck'
import { verifyAudit } from '../../server/services/verifyAudit'
import { withdrawSeries } from '../../server/services/withdrawSeries'
import { refusal } from '../support/actors'
import { fittedSeries, mailsOf, stepsOf } from '../support/checks'
import { makeDeps, makePerson, makeProgramme } from '../support/factory'
import { failEachQuery } from '../support/faults'
import { toyKind } from '../support/toyKind'

const deps = makeDeps({ kinds: { [toyKind.kind]: toyKind } })
afterAll(() => deps.close())
type Way = Awaited<ReturnType<typeof fittedSeries>>

/** How a fresh draft gets into each state, one step after the other. */
const TO: Record<Exclude<CheckState, 'firstSigned'>, (way: Way) => Promise<unknown>> = {
  draft: async () => undefined,
  waiting: way => way.submit(way.fitId),
  signed: async (way) => { await way.submit(way.fitId); await way.sign(way.fitId) },
  returned: async (way) => { await way.submit(way.fitId); await way.giveBack(way.fitId) },
  recalled: async (way) => { await way.submit(way.fitId); await way.recall(way.fitId) },
  withdrawn: async (way) => { await way.submit(way.fitId); await way.sign(way.fitId); await way.withdraw(way.fitId) },
}
const STEPS: Record<Exclude<CheckEvent, 'firstSigned'>, (way: Way, seq: number) => Promise<{ state: CheckEvent, seq: number }>> = {
  waiting: (way, seq) => way.submit(way.fitId, seq, 'Measured again; the same.'),
  signed: (way, seq) => way.sign(way.fitId, seq),
  returned: (way, seq) => way.giveBack(way.fitId, seq),
  recalled: (way, seq) => way.recall(way.fitId, seq),
  withdrawn: (way, seq) => way.withdraw(way.fitId, seq),
}
const ALLOWED: Record<Exclude<CheckState, 'firstSigned'>, CheckEvent[]> = {
  draft: ['waiting'], waiting: ['signed', 'returned', 'recalled'], signed: ['withdrawn'], returned: ['waiting'], recalled: ['waiting'], withdrawn: ['waiting'],
}

describe('steps of a check, from every state [architecture: states]', () => {
  for (const state of Object.keys(TO) as (keyof typeof TO)[]) {
    it(`${state} takes ${ALLOWED[state].join(', ')} and refuses every other step without storing anything`, async () => {
      for (const event of Object.keys(STEPS) as (keyof typeof STEPS)[]) {
        const way = await fittedSeries(deps)
        await TO[state](way)
        const before = await way.show(way.fitId)
        if (ALLOWED[state].includes(event)) {
          expect(await STEPS[event](way, before.seq), `${state} ${event}`).toEqual({ state: event, seq: before.seq + 1 })
          expect((await way.show(way.fitId)).events).toHaveLength(before.events.length + 1)
        }
        else {
          expect((await refusal(STEPS[event](way, before.seq))).code, `${state} ${event}`).toBe('conflict')
          expect(await way.show(way.fitId), `${state} ${event}`).toEqual(before)
        }
      }
    })
  }

  it('need words of at least ten characters to return, to withdraw, and to answer a return', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    expect(await refusal(way.giveBack(way.fitId, 1, '  too low  '))).toMatchObject({ code: 'invalidInput', message: expect.stringContaining('stay with this number') })
    await way.giveBack(way.fitId)
    expect((await refusal(way.submit(way.fitId, 2, 'yes'))).code).toBe('invalidInput')
    expect(await way.submit(way.fitId, 2, 'It was water; see the notebook.')).toEqual({ state: 'waiting', seq: 3 })
  })

  it('are written to the audit chain with who, what and why', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    await way.giveBack(way.fitId)
    const links = await deps.db('audit').where('chain_id', toBinary(way.programme.id)).orderBy('seq', 'desc').limit(1).select('command', 'payload') as { command: string, payload: string }[]
    expect(links[0]).toMatchObject({ command: 'returnEvidence' })
    expect(JSON.parse(links[0]!.payload)).toMatchObject({ agent: 'TS-01', event: 'returned', comment: 'The blank reads too low; was it water?' })
    expect(await verifyAudit(deps, way.programme.id)).toMatchObject({ whole: true })
  })
})

describe('sending for checking', () => {
  it('an older version is refused and says which is newer', async () => {
    const way = await fittedSeries(deps)
    await way.refit({}, way.chemist)
    expect(await refusal(way.submit(way.fitId))).toMatchObject({ code: 'conflict', message: 'Version 2 is newer; send that one.' })
  })

  it('a refused fit cannot be sent', async () => {
    const way = await fittedSeries(deps)
    const out = (tubeNo: number) => ({ tubeNo, pointIndex: null, reason: 'This tube was filled twice.' })
    const refused = await way.refit({ exclusions: [out(2), out(3)] }, way.chemist)
    expect(await refusal(way.submit(refused))).toMatchObject({ code: 'conflict', message: expect.stringContaining('refused') })
  })

  it('a newer version recalls the older one that waits: one of a series stands in the queue', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    const second = await way.refit({}, way.chemist)
    await way.submit(second)
    expect((await way.show(way.fitId)).events.map(event => [event.event, event.comment])).toEqual([['waiting', ''], ['recalled', 'Version 2 was sent instead.']])
    expect((await listQueue(deps, { actor: way.physicist, programmeId: way.programme.id })).map(item => item.versionNo)).toEqual([2])
  })
})

describe('the queue', () => {
  it('stands oldest first, with who sent it, and marks what the person asking may not sign', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    const asPhysicist = await listQueue(deps, { actor: way.physicist, programmeId: way.programme.id })
    expect(asPhysicist).toMatchObject([{ agentCode: 'TS-01', mechanism: 'T1', topology: 'ring', description: 'glow, 37 °C', submittedBy: way.chemist.name, mine: false, state: 'waiting', flags: 0 }])
    expect(await listQueue(deps, { actor: way.chemist, programmeId: way.programme.id })).toMatchObject([{ mine: true }])
  })

  it('loses what was signed, returned, recalled or whose series was withdrawn', async () => {
    for (const step of ['sign', 'giveBack', 'recall'] as const) {
      const way = await fittedSeries(deps)
      await way.submit(way.fitId)
      await way[step](way.fitId)
      expect(await listQueue(deps, { actor: way.physicist, programmeId: way.programme.id }), step).toEqual([])
    }
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    await withdrawSeries(deps, { actor: way.chemist, programmeId: way.programme.id, seriesId: way.seriesId, reason: 'The phantom had warmed up.' })
    expect(await listQueue(deps, { actor: way.physicist, programmeId: way.programme.id })).toEqual([])
  })

  it('and a check of another programme answer like ones that do not exist', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    const other = await makeProgramme(deps)
    expect(await listQueue(deps, { actor: other.people.physicist, programmeId: other.id })).toEqual([])
    const elsewhere = stepsOf(deps, other)
    const [stranger, missing] = [await refusal(elsewhere.show(way.fitId)), await refusal(elsewhere.show(deps.ids.next()))]
    expect(stranger).toEqual(missing)
    expect(await refusal(elsewhere.sign(way.fitId, 1))).toEqual(await refusal(elsewhere.sign(deps.ids.next(), 1)))
    expect((await way.show(way.fitId)).state).toBe('waiting')
  })
})

describe('mail of a check', () => {
  it('a return goes to whoever uploaded, with the words and the way there, and to nobody else', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    await way.giveBack(way.fitId)
    const mails = await mailsOf(deps, way.programme)
    expect(mails).toMatchObject([{ to: `${way.chemist.personId}@example.org`, template: 'check.returned', subject: expect.stringContaining('TS-01') }])
    expect(mails[0]!.body).toContain('The blank reads too low; was it water?')
    expect(mails[0]!.body).toContain(`/${way.programme.code}/checks/fit/${way.fitId}`)
  })

  it('does not reach somebody who has left the programme', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    await deps.db('membership').where({ person_id: toBinary(way.chemist.personId) }).delete()
    await way.giveBack(way.fitId)
    expect(await mailsOf(deps, way.programme)).toEqual([])
  })
})

it('a signature is stored whole or not at all, whichever query fails [architecture: tests]', async () => {
  const way = await fittedSeries(deps)
  await way.submit(way.fitId)
  const second = await makePerson(deps, { programmeId: way.programme.id, roles: ['physicist'] })
  await failEachQuery({
    deps,
    attempt: () => way.sign(way.fitId, 1, second),
    stored: async () => {
      const [events, mails, jobs] = await Promise.all([way.show(way.fitId), mailsOf(deps, way.programme), deps.db('job').where({ programme_id: toBinary(way.programme.id), kind: 'ground.notice' })])
      return { state: events.state, events: events.events.length, mails: mails.length, jobs: jobs.length }
    },
  })
  expect(await way.show(way.fitId)).toMatchObject({ state: 'signed', seq: 2 })
})

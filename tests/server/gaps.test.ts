import { afterAll, describe, expect, it } from 'vitest'
import { JOBS } from '../../server/jobs/index'
import { drainJobs } from '../../server/jobs/runJobs'
import { assignGap, listGaps } from '../../server/services/gaps'
import { readAudit } from '../../server/services/readAudit'
import { recordDecision } from '../../server/services/recordDecision'
import { saveProfile } from '../../server/services/saveProfile'
import { showBench } from '../../server/services/showBench'
import { BenchDto } from '../../shared/schemas/bench'
import { RecordDecisionInput } from '../../shared/schemas/decision'
import { AssignGap, GapListDto, type GapKey } from '../../shared/schemas/gap'
import { SaveProfileInput } from '../../shared/schemas/profile'
import { DEFAULT_PROFILE } from '../../shared/science/placement/profile'
import { makeDeps, makePerson, makeProgramme, type TestProgramme } from '../support/factory'
import { rateLawEntry } from '../support/publishedRecords'
import { enter, register } from '../support/registry'

const deps = makeDeps()
afterAll(() => deps.close())

const DUE = '2026-03-20'
const list = async (programme: TestProgramme) => GapListDto.parse(await listGaps(deps, { programmeId: programme.id }))
const gapOf = async (programme: TestProgramme, key: GapKey, agent = 'TS-01') => (await list(programme)).gaps.find(one => one.key === key && one.agent === agent)
const tasks = async (programme: TestProgramme, actor = programme.people.chemist) => BenchDto.parse(await showBench(deps, { actor, programmeId: programme.id })).tasks
const assign = (programme: TestProgramme, { assignee = programme.people.chemist.personId, key = 'loss' as GapKey, due = DUE, expectedSeq = 0, agent = 'TS-01' } = {}) =>
  assignGap(deps, { actor: programme.people.lead, programmeId: programme.id, body: AssignGap.parse({ agent, key, expectedSeq, task: { assignee, due, note: 'Before the meeting.' } }) })
const enterRates = (programme: TestProgramme, agent = 'TS-01') => enter(deps, programme, { agent, kind: 'rateLaw', entry: rateLawEntry({ k0_per_s: { value: 1e-9, se: 2e-10 }, k1_per_M_s: { value: 2e-5, se: 1e-6 } }) })

async function made() {
  const programme = await makeProgramme(deps)
  await register(deps, programme, { code: 'TS-01' })
  return programme
}

describe('gaps of a programme', () => {
  it('are everything that nobody measured, each with who could and what it would open', async () => {
    const programme = await made()
    const { gaps, placed } = await list(programme)
    expect(placed).toBe(0)
    expect(gaps.map(one => one.key).sort()).toEqual(['concentration', 'equilibrium', 'freeMetal', 'loss', 'ratio', 'readiness', 'zincPhosphate'])
    expect(gaps.find(one => one.key === 'freeMetal')).toMatchObject({ places: 0, limits: ['Unbound metal at the working concentration', 'Free metal in the batch', 'Free metal in the batch, warning'], who: expect.stringContaining('chemist') })
    expect(gaps.find(one => one.key === 'loss')?.note).toContain('together with the other coordinate')
    expect(gaps.find(one => one.key === 'readiness')).toMatchObject({ what: expect.stringContaining('Viscosity of the stock'), limits: [] })
    expect(gaps.at(-1)!.key).toBe('readiness')
  })

  it('close when the value comes, before anybody signs it, and an agent that was stopped has none', async () => {
    const programme = await made()
    await enterRates(programme)
    expect(await gapOf(programme, 'loss')).toBeUndefined()
    expect(await gapOf(programme, 'concentration')).toMatchObject({ rankNow: null, places: 0, note: expect.stringContaining('The first of its kind') })
    const profile = await saveProfile(deps, { actor: programme.people.lead, programmeId: programme.id, body: SaveProfileInput.parse({ payload: DEFAULT_PROFILE, basedOn: null, note: 'start' }) })
    await recordDecision(deps, { actor: programme.people.lead, programmeId: programme.id, body: RecordDecisionInput.parse({ agent: 'TS-01', profileVersionId: profile.id, outcome: 'stop', reasons: 'Lets go too quickly for anything.', supersedes: null }) })
    expect((await list(programme)).gaps).toEqual([])
  })

  it('stay in their programme', async () => {
    await made()
    expect((await list(await makeProgramme(deps))).gaps).toEqual([])
  })
})

describe('an assignment', () => {
  it('stands on the page and on the Bench of the person, who has a mail; it goes when the gap is closed', async () => {
    const programme = await made()
    const { chemist, lead, physicist } = programme.people
    await assign(programme)
    expect((await gapOf(programme, 'loss'))!).toMatchObject({ seq: 1, assignment: { assignee: chemist.name, due: DUE, by: lead.name, note: 'Before the meeting.', isOverdue: false } })
    expect(await tasks(programme)).toMatchObject([{ agent: 'TS-01', key: 'loss', assignment: { due: DUE } }])
    expect(await tasks(programme, physicist)).toEqual([])
    await drainJobs(deps, JOBS, programme.id)
    const mails = deps.sent.filter(mail => mail.to === `${chemist.personId}@example.org`)
    expect(mails).toMatchObject([{ subject: `TS-01: a gap to close by ${DUE}` }])
    expect(mails[0]!.body).toContain('Before the meeting.')
    await enterRates(programme)
    expect(await tasks(programme)).toEqual([])
  })

  it('is overdue the day after its day', async () => {
    const programme = await made()
    await assign(programme, { due: '2026-03-02' })
    expect((await tasks(programme))[0]!.assignment.isOverdue).toBe(false)
    const later = { ...deps, clock: { ...deps.clock, now: () => new Date('2026-03-03T00:00:00.000Z') } }
    expect((await listGaps(later, { programmeId: programme.id })).gaps.find(one => one.key === 'loss')!.assignment!.isOverdue).toBe(true)
  })

  it('is given to another or taken back by naming the version seen; the person before is told; every step is in the trail', async () => {
    const programme = await made()
    const { chemist, physicist, lead } = programme.people
    await assign(programme)
    await assign(programme, { assignee: physicist.personId, expectedSeq: 1 })
    expect([(await tasks(programme)).length, (await tasks(programme, physicist)).length]).toEqual([0, 1])
    await expect(assign(programme, { expectedSeq: 1 })).rejects.toMatchObject({ code: 'conflict', details: { data: { personName: lead.name } } })
    const raced = await Promise.allSettled([assign(programme, { expectedSeq: 2 }), assign(programme, { expectedSeq: 2 })])
    expect(raced.map(one => one.status).sort()).toEqual(['fulfilled', 'rejected'])
    const back = (expectedSeq: number) => assignGap(deps, { actor: lead, programmeId: programme.id, body: AssignGap.parse({ agent: 'TS-01', key: 'loss', expectedSeq, task: null }) })
    await back(3)
    expect(await tasks(programme)).toEqual([])
    await expect(back(4)).rejects.toMatchObject({ code: 'invalidInput' })
    await drainJobs(deps, JOBS, programme.id)
    expect(deps.sent.filter(mail => mail.to === `${chemist.personId}@example.org`).map(mail => mail.subject).filter(subject => subject.includes('no longer yours'))).toHaveLength(2)
    const trail = await readAudit(deps, { chainId: programme.id, before: null })
    expect(trail.links.filter(link => link.command === 'assignGap')).toHaveLength(4)
  })

  it('is refused for a partner, a stranger, a day gone by, an agent elsewhere and a gap that is closed', async () => {
    const programme = await made()
    const stranger = await makePerson(deps)
    for (const assignee of [programme.people.partner.personId, stranger.personId]) await expect(assign(programme, { assignee })).rejects.toMatchObject({ code: 'invalidInput', details: { field: 'task.assignee' } })
    await expect(assign(programme, { due: '2026-03-01' })).rejects.toMatchObject({ code: 'invalidInput', details: { field: 'task.due' } })
    await expect(assign(programme, { agent: 'TS-99' })).rejects.toMatchObject({ code: 'conflict' })
    await enterRates(programme)
    await expect(assign(programme)).rejects.toMatchObject({ code: 'conflict', message: expect.stringContaining('closed') })
    expect(AssignGap.safeParse({ agent: 'TS-01', key: 'everything', expectedSeq: 0, task: null }).success).toBe(false)
  })
})

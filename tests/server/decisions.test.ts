import { afterAll, describe, expect, it } from 'vitest'
import { drainJobs } from '../../server/jobs/runJobs'
import { JOBS } from '../../server/jobs/index'
import { acknowledgeNotice } from '../../server/services/acknowledgeNotice'
import { correctRecord } from '../../server/services/correctRecord'
import { recordDecision } from '../../server/services/recordDecision'
import { saveProfile } from '../../server/services/saveProfile'
import { listDecisions, showDecision } from '../../server/services/showDecision'
import { showMap } from '../../server/services/showMap'
import { signEvidence } from '../../server/services/signEvidence'
import { submitForCheck } from '../../server/services/submitForCheck'
import { noticeGround } from '../../server/services/noticeGround'
import { DEFAULT_PROFILE } from '../../shared/science/placement/profile'
import { RecordDecisionInput } from '../../shared/schemas/decision'
import { SaveProfileInput } from '../../shared/schemas/profile'
import { makeDeps, makePerson, makeProgramme, type TestProgramme } from '../support/factory'
import { rateLawEntry } from '../support/publishedRecords'
import { enter, register, sign, SOURCE } from '../support/registry'

const deps = makeDeps()
afterAll(() => deps.close())

const REASONS = 'Holds its metal well; two batches agree within their errors.'

async function ready() {
  const programme = await makeProgramme(deps)
  await register(deps, programme, { code: 'TS-01' })
  const record = await enter(deps, programme, { agent: 'TS-01', kind: 'rateLaw', entry: rateLawEntry({ k0_per_s: { value: 1e-9, se: 2e-10 }, k1_per_M_s: { value: 2e-5, se: 1e-6 } }) })
  await sign(deps, programme, 'record', record.id)
  const profile = await saveProfile(deps, { actor: programme.people.lead, programmeId: programme.id, body: SaveProfileInput.parse({ payload: DEFAULT_PROFILE, basedOn: null, note: 'start' }) })
  return { programme, record, profile }
}

const decide = (programme: TestProgramme, profileVersionId: string, supersedes: string | null = null, actor = programme.people.lead) =>
  recordDecision(deps, { actor, programmeId: programme.id, body: RecordDecisionInput.parse({ agent: 'TS-01', profileVersionId, outcome: 'hold', reasons: REASONS, supersedes }) })

describe('a decision', () => {
  it('freezes signed evidence, placement, profile version and who signed, and tells the programme by mail', async () => {
    const { programme, profile } = await ready()
    const { id } = await decide(programme, profile.id)
    const decision = await showDecision(deps, { programmeId: programme.id, isStaff: true, id })
    expect(decision.snapshot.evidence.map(item => item.quantity).sort()).toEqual(['k0_per_s', 'k1_per_M_s'])
    expect(decision.snapshot.placement.lane).toBe('concentrationMissing')
    expect(decision.snapshot.profile).toMatchObject({ versionNo: 1, payload: { b0_T: 3 } })
    expect(decision.snapshot.signatures).toMatchObject([{ subjectKind: 'record', personName: programme.people.physicist.name }])
    expect(decision.snapshotHash).toMatch(/^[0-9a-f]{64}$/)
    await drainJobs(deps, JOBS, programme.id)
    const addresses = Object.values(programme.people).map(one => `${one.personId}@example.org`)
    expect(deps.sent.filter(mail => mail.subject === 'Decision on TS-01: hold' && addresses.includes(mail.to))).toHaveLength(4)
  })

  it('is taken once when two leads decide at the same moment: the second is told who and when', async () => {
    const { programme, profile } = await ready()
    const other = await makePerson(deps, { programmeId: programme.id, roles: ['lead'] })
    const outcomes = await Promise.allSettled([decide(programme, profile.id), decide(programme, profile.id, null, other)])
    expect(outcomes.map(one => one.status).sort()).toEqual(['fulfilled', 'rejected'])
    const refused = outcomes.find(one => one.status === 'rejected')!.reason
    expect(refused).toMatchObject({ code: 'conflict', details: { data: { outcome: 'hold' } } })
    expect((await listDecisions(deps, { programmeId: programme.id, isStaff: true })).decisions).toHaveLength(1)
  })

  it('is superseded by naming it, and only once', async () => {
    const { programme, profile } = await ready()
    const first = await decide(programme, profile.id)
    await expect(decide(programme, profile.id)).rejects.toMatchObject({ code: 'conflict' })
    const second = await decide(programme, profile.id, first.id)
    await expect(decide(programme, profile.id, first.id)).rejects.toMatchObject({ code: 'conflict' })
    const { decisions } = await listDecisions(deps, { programmeId: programme.id, isStaff: true })
    expect(decisions.map(one => [one.id, one.supersededBy])).toEqual([[second.id, null], [first.id, second.id]])
  })

  it('cannot be taken on an agent, or under a profile, of another programme', async () => {
    const { programme } = await ready()
    const stranger = await ready()
    await expect(decide(programme, stranger.profile.id)).rejects.toMatchObject({ code: 'notFound' })
    const empty = await makeProgramme(deps)
    await expect(recordDecision(deps, { actor: empty.people.lead, programmeId: empty.id, body: RecordDecisionInput.parse({ agent: 'TS-01', profileVersionId: stranger.profile.id, outcome: 'stop', reasons: REASONS, supersedes: null }) }))
      .rejects.toMatchObject({ code: 'notFound' })
  })
})

describe('the ground of a decision', () => {
  it('moves when a newer signed value lies outside the old interval: noticed once, the snapshot stays, the lead acknowledges', async () => {
    const { programme, record, profile } = await ready()
    const { chemist, physicist, lead } = programme.people
    const { id } = await decide(programme, profile.id)
    const before = await showDecision(deps, { programmeId: programme.id, isStaff: true, id })
    const newer = await correctRecord(deps, {
      actor: chemist, programmeId: programme.id, recordId: record.id,
      body: { basedOn: 1, lot: null, source: SOURCE, reason: 'Measured again with fresh acid.', entry: rateLawEntry({ k0_per_s: { value: 1e-9, se: 2e-10 }, k1_per_M_s: { value: 9e-5, se: 1e-6 } }) },
    })
    const check = { programmeId: programme.id, kind: 'record' as const, id: newer.id, comment: '' }
    await submitForCheck(deps, { ...check, actor: chemist, expectedSeq: 0 })
    await signEvidence(deps, { ...check, actor: physicist, expectedSeq: 1 })
    await drainJobs(deps, JOBS, programme.id)
    const after = await showDecision(deps, { programmeId: programme.id, isStaff: true, id })
    expect(after.notices).toHaveLength(1)
    expect(after.notices[0]!.changes).toContainEqual(expect.objectContaining({ now: expect.stringContaining('0.00009') }))
    expect(after.notices[0]!.by).toBe(physicist.name)
    expect(after.snapshotHash).toBe(before.snapshotHash)
    expect(await noticeGround(deps, { programmeId: programme.id, cause: after.notices[0]!.cause })).toBe(0)
    await acknowledgeNotice(deps, { actor: lead, programmeId: programme.id, id: after.notices[0]!.id, note: 'Looked at it; the decision stands.' })
    await expect(acknowledgeNotice(deps, { actor: lead, programmeId: programme.id, id: after.notices[0]!.id, note: 'Looked at it; the decision stands.' })).rejects.toMatchObject({ code: 'conflict' })
    expect((await listDecisions(deps, { programmeId: programme.id, isStaff: true })).decisions[0]!.groundMoved).toBe(0)
    expect((await showDecision(deps, { programmeId: programme.id, isStaff: false, id })).notices).toEqual([])
  })
})

describe('a screening profile', () => {
  it('is saved in versions; a version based on an older one is refused with who and when', async () => {
    const { programme, profile } = await ready()
    const { lead } = programme.people
    const save = (basedOn: number | null, b0_T: number) => saveProfile(deps, { actor: lead, programmeId: programme.id, body: SaveProfileInput.parse({ payload: { ...DEFAULT_PROFILE, b0_T }, basedOn }) })
    expect(await save(1, 1.5)).toMatchObject({ versionNo: 2, payload: { b0_T: 1.5 }, profileId: profile.profileId })
    await expect(save(1, 7)).rejects.toMatchObject({ code: 'conflict', details: { data: { versionNo: 2 } } })
    const raced = await Promise.allSettled([save(2, 7), save(2, 9.4)])
    expect(raced.map(one => one.status).sort()).toEqual(['fulfilled', 'rejected'])
    const map = await showMap(deps, { programmeId: programme.id, scope: 'programme' })
    expect(map.profiles.map(one => one.versionNo)).toEqual([3, 2, 1])
  })

  it('says which number is outside its ends and what is accepted', () => {
    const refused = SaveProfileInput.safeParse({ payload: { ...DEFAULT_PROFILE, pH: 19 }, basedOn: null })
    expect(refused.error?.issues[0]).toMatchObject({ path: ['payload', 'pH'], message: expect.stringContaining('Accepted: 3 to 10') })
    expect(SaveProfileInput.safeParse({ payload: { ...DEFAULT_PROFILE, slowShareLow_frac: 0.4 }, basedOn: null }).error?.issues[0]?.path).toContain('slowShareLow_frac')
    expect(SaveProfileInput.safeParse({ payload: { ...DEFAULT_PROFILE, warnFreeMetal_frac: 0.01 }, basedOn: null }).error?.issues[0]?.path).toContain('warnFreeMetal_frac')
  })

  it('may switch the slow part off with a share of nought, whatever its range', () => {
    expect(SaveProfileInput.safeParse({ payload: { ...DEFAULT_PROFILE, slowShare_frac: 0 }, basedOn: null }).success).toBe(true)
  })
})

describe('the map of a partner', () => {
  it('holds signed evidence and agents that have some, nothing else', async () => {
    const { programme } = await ready()
    await register(deps, programme, { code: 'TS-02' })
    await enter(deps, programme, { agent: 'TS-01', kind: 'rateLaw', entry: rateLawEntry({ k1_per_M_s: { value: 3e-5 } }) })
    const [staff, partner] = await Promise.all([showMap(deps, { programmeId: programme.id, scope: 'programme' }), showMap(deps, { programmeId: programme.id, scope: 'signed' })])
    expect(staff.agents.map(one => one.code)).toEqual(['TS-01', 'TS-02'])
    expect(partner.agents.map(one => one.code)).toEqual(['TS-01'])
    expect(partner.agents[0]!.evidence.every(item => item.signed)).toBe(true)
  })
})

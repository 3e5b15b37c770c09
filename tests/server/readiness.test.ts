import { afterAll, describe, expect, it } from 'vitest'
import { readAudit } from '../../server/services/readAudit'
import { enterReadiness, showReadiness } from '../../server/services/readiness'
import { recordDecision } from '../../server/services/recordDecision'
import { saveProfile } from '../../server/services/saveProfile'
import { showDecision } from '../../server/services/showDecision'
import { RecordDecisionInput } from '../../shared/schemas/decision'
import { SaveProfileInput } from '../../shared/schemas/profile'
import { EnterReadiness } from '../../shared/schemas/readiness'
import { DEFAULT_PROFILE } from '../../shared/science/placement/profile'
import { readinessFindings, READINESS_ITEMS } from '../../shared/readiness'
import { makeDeps, makeProgramme, type TestProgramme } from '../support/factory'
import { register } from '../support/registry'

const deps = makeDeps()
afterAll(() => deps.close())

const value = (number: number, kind: '=' | '<' | '>' = '=') => ({ kind, value: number, se: null, conditions: 'water, 25 °C' })
const NOTHING = Object.fromEntries(READINESS_ITEMS.map(item => [item.key, null]))
const body = (payload: Record<string, unknown> = {}, basedOn = 0) => ({ basedOn, payload: { ...NOTHING, note: null, ...payload }, reason: 'Weighed and measured this week.' })
const enter = (programme: TestProgramme, payload: Record<string, unknown>, basedOn = 0) =>
  enterReadiness(deps, { actor: programme.people.chemist, programmeId: programme.id, code: 'TS-01', body: EnterReadiness.parse(body(payload, basedOn)) })
const show = (programme: TestProgramme) => showReadiness(deps, { programmeId: programme.id, code: 'TS-01' })

async function made() {
  const programme = await makeProgramme(deps)
  await register(deps, programme, { code: 'TS-01' })
  return programme
}

describe('the readiness list of an agent', () => {
  it('is all gaps while nobody entered it, with the batches that were made', async () => {
    const programme = await made()
    expect(await show(programme)).toMatchObject({ entry: null, batches: ['L1'], gaps: READINESS_ITEMS.map(item => item.label), findings: [], history: [] })
  })

  it('keeps what was not measured apart from zero, and says what is short', async () => {
    const programme = await made()
    await enter(programme, { onHand_mg: value(0), needed_mg: value(35.5) })
    const list = await show(programme)
    expect(list.entry?.payload).toMatchObject({ onHand_mg: { value: 0 }, solubility_mM: null })
    expect(list.gaps).not.toContain('Amount on hand')
    expect(list.gaps).toContain('Solubility')
    expect(list.findings).toEqual([{ isFlag: true, sentence: 'The amount on hand does not suffice: 35.5 mg short.' }])
  })

  it('only grows: a new version names the one before, and two at once meet in a conflict that says who', async () => {
    const programme = await made()
    await enter(programme, { solubility_mM: value(500, '>') })
    await enter(programme, { solubility_mM: value(620) }, 1)
    const list = await show(programme)
    expect([list.entry?.versionNo, list.entry?.payload.solubility_mM?.kind, list.history.map(one => one.versionNo)]).toEqual([2, '=', [2, 1]])
    await expect(enter(programme, {}, 1)).rejects.toMatchObject({ code: 'conflict', details: { data: { personName: programme.people.chemist.name } } })
    const raced = await Promise.allSettled([enter(programme, {}, 2), enter(programme, {}, 2)])
    expect(raced.map(one => one.status).sort()).toEqual(['fulfilled', 'rejected'])
    expect((await show(programme)).history).toHaveLength(3)
    const trail = await readAudit(deps, { chainId: programme.id, before: null })
    expect(trail.links.filter(link => link.command === 'enterReadiness')).toHaveLength(3)
  })

  it('is refused where an item is left out, has a wrong unit by its size, or is a bound with an error', () => {
    const { viscosity_mPa_s: _, ...short } = body().payload as Record<string, unknown>
    expect(EnterReadiness.safeParse({ ...body(), payload: short }).success).toBe(false)
    expect(EnterReadiness.safeParse(body({ solubility_mM: value(-1) })).error?.issues[0]).toMatchObject({ path: ['payload', 'solubility_mM', 'value'], message: expect.stringContaining('Accepted') })
    expect(EnterReadiness.safeParse(body({ viscosity_mPa_s: value(NaN) })).success).toBe(false)
    expect(EnterReadiness.safeParse(body({ viscosity_mPa_s: { ...value(2, '<'), se: 0.1 } })).error?.issues[0]?.path).toEqual(['payload', 'viscosity_mPa_s', 'se'])
  })

  it('belongs to its programme', async () => {
    await made()
    const other = await makeProgramme(deps)
    await expect(show(other)).rejects.toMatchObject({ code: 'notFound' })
    await expect(enter(other, {})).rejects.toMatchObject({ code: 'notFound' })
  })

  it('is frozen with a decision as it stood, gaps and all, for the staff alone', async () => {
    const programme = await made()
    await enter(programme, { stock_mM: value(500), solubility_mM: value(300) })
    const profile = await saveProfile(deps, { actor: programme.people.lead, programmeId: programme.id, body: SaveProfileInput.parse({ payload: DEFAULT_PROFILE, basedOn: null, note: 'start' }) })
    const decision = RecordDecisionInput.parse({ agent: 'TS-01', profileVersionId: profile.id, outcome: 'hold', reasons: 'Nothing is known of its viscosity.', supersedes: null })
    const { id } = await recordDecision(deps, { actor: programme.people.lead, programmeId: programme.id, body: decision })
    await enter(programme, { viscosity_mPa_s: value(2.1) }, 1)
    const read = (isStaff: boolean) => showDecision(deps, { programmeId: programme.id, isStaff, id })
    const { snapshot } = await read(true)
    expect(snapshot.readiness).toMatchObject({ entry: { versionNo: 1 }, gaps: expect.arrayContaining(['Viscosity of the stock']), findings: [{ isFlag: true }] })
    expect((await read(false)).snapshot.readiness).toBeUndefined()
  })
})

describe('amounts', () => {
  const of = (onHand: ReturnType<typeof value>, needed: ReturnType<typeof value>) => readinessFindings({ ...NOTHING, onHand_mg: onHand, needed_mg: needed } as never).map(one => one.sentence)
  it('are compared only as far as bounds allow', () => {
    expect(of(value(50), value(50))).toEqual(['The amount on hand suffices.'])
    expect(of(value(50, '>'), value(40))).toEqual(['The amount on hand suffices.'])
    expect(of(value(50, '<'), value(50))).toEqual(['The amount on hand does not suffice.'])
    expect(of(value(50, '<'), value(40))[0]).toContain('not known')
    expect(of(value(50), value(40, '>'))[0]).toContain('not known')
  })
})

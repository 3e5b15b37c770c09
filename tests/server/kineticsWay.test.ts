import { afterAll, describe, expect, it } from 'vitest'
import { currentEvidence } from '../../shared/evidence/item'
import { toAgentEvidence } from '../../shared/evidence/agentEvidence'
import { DEFAULT_PROFILE } from '../../shared/science/placement/profile'
import { placeAgents } from '../../shared/science/placement/place'
import { FitDto, FitRequest } from '../../shared/schemas/fit'
import { SeriesDto } from '../../shared/schemas/series'
import { readEvidence } from '../../server/queries/evidence'
import { describeKinds } from '../../server/services/describeKinds'
import { previewUpload } from '../../server/services/previewUpload'
import { repeatFit } from '../../server/services/repeatFit'
import { requestFit } from '../../server/services/requestFit'
import { showAgentStability, showStability } from '../../server/services/showStability'
import { showCheck } from '../../server/services/showCheck'
import { showFit } from '../../server/services/showFit'
import { showMap } from '../../server/services/showMap'
import { showSeries } from '../../server/services/showSeries'
import { signEvidence } from '../../server/services/signEvidence'
import { submitForCheck } from '../../server/services/submitForCheck'
import { courseSignals, SOLUTION, TIMES_h, type FlaskPlan } from '../support/kineticsTables'
import { makeDeps, makeProgramme, type TestProgramme } from '../support/factory'
import { register } from '../support/registry'
import { runJobs, stage, upload } from '../support/uploads'

const deps = makeDeps()
afterAll(() => deps.close())

const CODE = 'SK-21'
const OWNER = { complexCode: CODE, lot: 'L1' }
const ACIDS_M = [0.05, 0.1, 0.2, 0.4, 0.7, 1]
const flasks: FlaskPlan[] = ACIDS_M.map((acid_M, i) => ({ name: `flask ${i + 1}`, acid_M, rate_per_s: 2e-5 * acid_M }))

function courseTable(plan: readonly FlaskPlan[] = flasks): string {
  const signals = courseSignals(plan)
  return [...SOLUTION, '', ['Acid (M)', ...plan.map(one => one.acid_M)].join(','), ['Time (h)', ...plan.map(one => one.name)].join(','), ...TIMES_h.map((time, i) => [time, ...signals.map(column => column[i]!)].join(','))].join('\n')
}

async function uploaded(programme: TestProgramme, content: string, kind: string): Promise<string> {
  const { series } = await upload(deps, programme, { content, draft: { kind, ...OWNER } })
  await runJobs(deps, programme)
  return series[0]!.id
}
const fitOf = async (programme: TestProgramme, seriesId: string, versionNo = 1) => FitDto.parse(await showFit(deps, { programmeId: programme.id, scope: 'programme', seriesId, versionNo }))
async function sign(programme: TestProgramme, id: string): Promise<void> {
  const check = { programmeId: programme.id, kind: 'fit' as const, id, comment: '' }
  await submitForCheck(deps, { ...check, actor: programme.people.chemist, expectedSeq: 0 })
  await signEvidence(deps, { ...check, actor: programme.people.physicist, expectedSeq: 1 })
}
const rowOf = async (programme: TestProgramme, scope: 'programme' | 'signed' = 'signed') => (await showStability(deps, { programmeId: programme.id, scope })).agents.find(one => one.code === CODE)!

describe('the way of a time course [issue: stability]', () => {
  it('goes from a file of flasks through preview, fit, repeat and signature to a placement that was not there before', async () => {
    const programme = await makeProgramme(deps)
    await register(deps, programme, { code: CODE })
    expect((await rowOf(programme, 'programme')).kd).toBeNull()
    const id = await stage(deps, programme, courseTable())
    const preview = await previewUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, id, draft: { kind: 'kinetics.course', ...OWNER } })
    expect(preview).toMatchObject({ canStore: true, layout: 'columnPerTube', series: [{ tubes: 6, title: 'dissociation, 25\u00A0°C, 1\u00A0M KCl' }] })
    expect(preview.quickLook?.layers).toHaveLength(6)

    const seriesId = await uploaded(programme, courseTable(), 'kinetics.course')
    const fit = await fitOf(programme, seriesId)
    expect(fit.outcome).toBe('ok')
    expect(fit.series!.headline).toMatchObject({ name: 'k1_per_M_s', kind: '=', unit: 'M^-1 s^-1' })
    expect(Math.abs(fit.series!.headline.value - 2e-5)).toBeLessThan(3 * fit.series!.headline.se!)
    expect(fit.evidence.map(item => [item.quantity, item.value.kind])).toEqual([['k1_per_M_s', '='], ['k0_per_s', '<']])
    expect(fit.series!.parameters.map(one => one.evidenceId)).toEqual(fit.evidence.map(item => item.id))
    expect(fit.tubes.map(tube => tube.small.title)).toEqual(flasks.map(one => one.name))
    expect(fit.seriesFigure).toMatchObject({ x: { label: '[H^{+}]' } })
    expect(await repeatFit(deps, { actor: programme.people.physicist, programmeId: programme.id, seriesId, versionNo: 1 })).toMatchObject({ same: true, differenceCount: 0 })
    const series = SeriesDto.parse(await showSeries(deps, { programmeId: programme.id, scope: 'programme', seriesId }))
    expect(series.words.title).toBe('Rate law')
    expect((await showCheck(deps, { actor: programme.people.physicist, programmeId: programme.id, kind: 'fit', id: fit.id })).description).toContain('dissociation')

    await sign(programme, fit.id)
    expect(currentEvidence(await readEvidence(deps.db, programme.id, 'signed')).map(item => [item.quantity, item.signed])).toEqual([['k1_per_M_s', true], ['k0_per_s', true]])
    const row = await rowOf(programme)
    expect([row.kd!.value.kind, row.halfLife!.value.kind]).toEqual(['<', '>'])
    expect(row.decades).toBeCloseTo(7.4 + Math.log10(0.05), 3)
    const detailed = await showAgentStability(deps, { programmeId: programme.id, scope: 'signed', code: CODE })
    expect(detailed.rateFigure).not.toBeNull()
    const map = await showMap(deps, { programmeId: programme.id, scope: 'signed' })
    const [placed] = placeAgents(map.agents.map(agent => toAgentEvidence(agent, agent.evidence)), DEFAULT_PROFILE, { includeUnsigned: false })
    expect(placed).toMatchObject({ lane: 'concentrationMissing', loss_frac: { kind: '<' } })
  })

  it('takes a half-life of one acid into the table of half-lives, and a refused law stands with its courses and its words', async () => {
    const programme = await makeProgramme(deps)
    await register(deps, programme, { code: CODE })
    const one = flasks.filter(flask => flask.acid_M === 1).flatMap(flask => [flask, { ...flask, name: 'flask 7' }])
    const seriesId = await uploaded(programme, courseTable(one), 'kinetics.course')
    const fit = await fitOf(programme, seriesId)
    expect(fit.evidence).toMatchObject([{ quantity: 'halfLifeAcid_s', conditions: { acid_M: 1, acid: 'HCl' } }])
    expect(fit.seriesFigure).toBeNull()
    await sign(programme, fit.id)
    const { inAcid } = await showStability(deps, { programmeId: programme.id, scope: 'signed' })
    expect(inAcid).toMatchObject([{ condition: '25\u00A0°C, 1\u00A0M HCl, 1\u00A0M KCl', rows: [{ code: CODE }] }])
    expect(inAcid[0]!.rows[0]!.halfLife.value.value / (Math.LN2 / 2e-5)).toBeCloseTo(1, 1)

    const two = await uploaded(programme, courseTable(flasks.slice(4)), 'kinetics.course')
    const refused = await fitOf(programme, two)
    expect(refused).toMatchObject({ outcome: 'refused', refusal: { reason: 'tooFewPoints', accepted: expect.stringContaining('3 different conditions') as string }, evidence: [] })
    expect(refused.tubes.every(tube => tube.headline !== null && tube.small.curve.length > 0)).toBe(true)
    await requestFit(deps, { actor: programme.people.physicist, programmeId: programme.id, seriesId: two, request: FitRequest.parse({ modelId: 'halfLifeOneAcid', exclusions: [{ tubeNo: 1, pointIndex: null, reason: 'Another acid than the one compared.' }] }) })
    await runJobs(deps, programme)
    expect(await fitOf(programme, two, 2)).toMatchObject({ outcome: 'ok', evidence: [{ quantity: 'halfLifeAcid_s' }] })
  })

  it('takes a run in zinc and phosphate to the ratio and the bound on its time, and into the overview', async () => {
    const programme = await makeProgramme(deps)
    await register(deps, programme, { code: CODE })
    const lines = ['Field: 20 MHz', 'Temperature: 37 °C', 'pH: 7', 'Complex: 2.5 mM', 'Zinc: 2.5 mM', 'Phosphate: 67 mM', 'R1 of the buffer: 0.4 1/s', 'Measured on: the complex itself', '', 'run,time (h),R1 (1/s),SE',
      ...[0, 1, 5, 24, 48, 72, 96].map(time => `a,${time},${(0.4 + 9.6 * (0.94 + 0.06 * Math.exp(-time / 20))).toFixed(3)},0.03`)]
    const seriesId = await uploaded(programme, lines.join('\n'), 'kinetics.zincPhosphate')
    const fit = await fitOf(programme, seriesId)
    expect(fit.evidence.map(item => [item.quantity, item.value.kind])).toEqual([['zincPhosphateRatio', '='], ['zincPhosphateTime080_s', '>']])
    await sign(programme, fit.id)
    const row = await rowOf(programme)
    expect(row.zincPhosphate!.value.value).toBeCloseTo(0.94, 2)
  })

  it('offers its kinds with what they ask', async () => {
    const { kinds } = await describeKinds(deps)
    expect(kinds.map(kind => kind.kind)).toEqual(expect.arrayContaining(['kinetics.course', 'kinetics.rates', 'kinetics.zincPhosphate']))
    expect(kinds.find(kind => kind.kind === 'kinetics.zincPhosphate')!.conditions.find(one => one.key === 'rate1Dia_per_s')).toMatchObject({ required: true, unit: 's^-1' })
  })
})

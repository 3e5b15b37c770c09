import { afterAll, describe, expect, it } from 'vitest'
import { currentEvidence } from '../../shared/evidence/item'
import { FitDto, FitRequest } from '../../shared/schemas/fit'
import { SeriesDto } from '../../shared/schemas/series'
import { readEvidence } from '../../server/queries/evidence'
import { describeKinds } from '../../server/services/describeKinds'
import { previewUpload } from '../../server/services/previewUpload'
import { repeatFit } from '../../server/services/repeatFit'
import { requestFit } from '../../server/services/requestFit'
import { showCheck } from '../../server/services/showCheck'
import { showFit } from '../../server/services/showFit'
import { showSeries } from '../../server/services/showSeries'
import { showAgentStability, showStability } from '../../server/services/showStability'
import { signEvidence } from '../../server/services/signEvidence'
import { submitForCheck } from '../../server/services/submitForCheck'
import { makeDeps, makeProgramme, type TestProgramme } from '../support/factory'
import { register } from '../support/registry'
import { TITRATIONS, titrationFile } from '../support/titrationTables'
import { runJobs, stage, upload } from '../support/uploads'

const deps = makeDeps()
afterAll(() => deps.close())

const CODE = 'SK-07'
const KIND = 'thermo.titration'
/** The calibration names no agent; the others name theirs in the table. */
const content = titrationFile('moderate').map(line => line.replace('SK-07,B2', 'SK-07,L1')).join('\n')
const { moderate } = TITRATIONS.files

const fitOf = async (programme: TestProgramme, seriesId: string, versionNo = 1) => FitDto.parse(await showFit(deps, { programmeId: programme.id, scope: 'programme', seriesId, versionNo }))
const rowOf = async (programme: TestProgramme, scope: 'programme' | 'signed' = 'signed') => (await showStability(deps, { programmeId: programme.id, scope })).agents.find(one => one.code === CODE)!

async function uploaded(programme: TestProgramme, text = content): Promise<string> {
  const { series } = await upload(deps, programme, { content: text, draft: { kind: KIND } })
  expect(series).toHaveLength(1)
  await runJobs(deps, programme)
  return series[0]!.id
}

async function sign(programme: TestProgramme, id: string): Promise<void> {
  const check = { programmeId: programme.id, kind: 'fit' as const, id, comment: '' }
  await submitForCheck(deps, { ...check, actor: programme.people.chemist, expectedSeq: 0 })
  await signEvidence(deps, { ...check, actor: programme.people.physicist, expectedSeq: 1 })
}

describe('the way of a titration [issue: stability]', () => {
  it('goes from a file of curves in mV through preview, fit, repeat and signature to the stability page', async () => {
    const programme = await makeProgramme(deps)
    await register(deps, programme, { code: CODE })
    expect((await rowOf(programme, 'programme')).logK).toBeNull()
    const id = await stage(deps, programme, content)
    const preview = await previewUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, id, draft: { kind: KIND } })
    expect(preview).toMatchObject({ canStore: true, layout: 'long', series: [{ tubes: 3, title: 'titration with Gd, 25\u00A0°C, 0.1\u00A0M KCl' }] })
    expect(preview.quickLook?.layers).toHaveLength(3)

    const seriesId = await uploaded(programme)
    const fit = await fitOf(programme, seriesId)
    expect(fit.outcome).toBe('ok')
    expect(fit.series!.headline).toMatchObject({ name: 'logK', kind: '=' })
    expect(Math.abs(fit.series!.headline.value - moderate.true.ML)).toBeLessThan(3 * fit.series!.headline.se!)
    expect(fit.evidence.map(item => [item.quantity, item.value.kind])).toEqual([['logK', '='], ['logKConditional', '='], ['pM', '=']])
    for (const item of fit.evidence) expect(fit.series!.parameters.find(one => one.evidenceId === item.id)).toMatchObject({ name: item.quantity, value: item.value.value })
    expect(fit.tubes.map(tube => tube.small.title)).toEqual(['acid', 'ligand', 'complex'])
    expect(fit.seriesFigure).toMatchObject({ x: { label: 'pH' }, y: { label: 'Residual' } })
    expect(await repeatFit(deps, { actor: programme.people.physicist, programmeId: programme.id, seriesId, versionNo: 1 })).toMatchObject({ same: true, differenceCount: 0 })
    expect(SeriesDto.parse(await showSeries(deps, { programmeId: programme.id, scope: 'programme', seriesId })).words.title).toBe('Constants')
    expect((await showCheck(deps, { actor: programme.people.physicist, programmeId: programme.id, kind: 'fit', id: fit.id })).description).toContain('titration with Gd')

    await sign(programme, fit.id)
    expect(currentEvidence(await readEvidence(deps.db, programme.id, 'signed')).map(item => [item.quantity, item.signed])).toEqual([['logK', true], ['logKConditional', true], ['pM', true]])
    const row = await rowOf(programme)
    expect([row.logK!.value.value, row.logK!.state]).toEqual([fit.series!.headline.value, 'signed'])
    expect(row.logKConditional!.value.se).toBeLessThan(row.logK!.value.se!)
    const { speciation, conditionalFigure } = await showAgentStability(deps, { programmeId: programme.id, scope: 'signed', code: CODE })
    expect(speciation).toMatchObject({ metal: 'Gd', logK: fit.series!.headline.value })
    speciation!.ligandProtonation.forEach((step, j) => expect(step).toBeCloseTo(moderate.true.steps[j]!, 1))
    expect(conditionalFigure).not.toBeNull()
  })

  it('fits another version with a species that the curves only bound, and stands refused in words where nothing is left to refine', async () => {
    const programme = await makeProgramme(deps)
    await register(deps, programme, { code: CODE })
    const seriesId = await uploaded(programme)
    const again = async (modelId: string, options: Record<string, string> = {}) => {
      await requestFit(deps, { actor: programme.people.physicist, programmeId: programme.id, seriesId, request: FitRequest.parse({ modelId, options }) })
      await runJobs(deps, programme)
    }
    await again('titrationMHL')
    const bounded = await fitOf(programme, seriesId, 2)
    expect(bounded.flags.map(flag => flag.id)).toEqual(['notDeterminable'])
    expect(bounded.series!.parameters.find(one => one.name === 'logKMHL')).toMatchObject({ kind: '<', se: null })
    await again('titrationML', { protonation: 'hold', logKML: 'hold' })
    const refused = await fitOf(programme, seriesId, 3)
    expect(refused).toMatchObject({ outcome: 'refused', refusal: { reason: 'nothingToHold', accepted: expect.stringContaining('conditions') as string }, evidence: [] })
    expect(refused.tubes.map(tube => tube.points.length)).toEqual([40, 70, 70])
  })

  it('takes metal and protonation constants from the registry where the file says neither, and stops another metal', async () => {
    const programme = await makeProgramme(deps)
    const registered = { stepwiseLogK: moderate.true.steps.map(value => ({ value: Number((value + 0.2).toFixed(2)), se: null })), temperature_K: 298.15, ionicStrength_M: 0.1, medium: 'NaCl', source: 'invented for this test' }
    await register(deps, programme, { code: CODE, protonation: registered })
    const bare = content.split('\n').filter(line => !/^(?:Metal|Protonation)/.test(line)).join('\n')
    const look = async (text: string) => previewUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, id: await stage(deps, programme, text), draft: { kind: KIND } })
    const preview = await look(bare)
    expect(preview).toMatchObject({ canStore: true, conditions: { metal: 'Gd', protonation: '9.72; 6.35; 2.92' } })
    expect(preview.found.filter(one => one.place === `the registry, ${CODE}`).map(one => one.key)).toEqual(['metal', 'protonation'])
    expect(preview.problems).toContainEqual(expect.objectContaining({ id: 'otherMedium', severity: 'asks', message: expect.stringContaining('KCl and NaCl') as string }))
    const fit = await fitOf(programme, await uploaded(programme, bare))
    expect(Math.abs(fit.series!.headline.value - moderate.true.ML)).toBeLessThan(3 * fit.series!.headline.se!)

    const other = await look(content.replace('Metal: Gd', 'Metal: Eu'))
    expect(other.canStore).toBe(false)
    expect(other.problems).toContainEqual(expect.objectContaining({ id: 'otherMetal', severity: 'blocks', field: 'conditions.metal' }))
    const own = await look(content)
    expect([own.conditions.protonation, own.problems]).toEqual(['9.82; 5.85; 3.02', []])
  })

  it('is offered with what it asks', async () => {
    const kind = (await describeKinds(deps)).kinds.find(one => one.kind === KIND)!
    expect(kind.templates).toEqual(['titration-long.csv', 'titration-batch.csv'])
    expect(kind.conditions.find(one => one.key === 'vessel_L')).toMatchObject({ unit: 'mL' })
  })
})

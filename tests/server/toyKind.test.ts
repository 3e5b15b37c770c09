import { afterAll, describe, expect, it } from 'vitest'
import { currentEvidence } from '../../shared/evidence/item'
import { readEvidence } from '../../server/queries/evidence'
import { describeKinds, readTemplate } from '../../server/services/describeKinds'
import { listSeries } from '../../server/services/listSeries'
import { previewUpload } from '../../server/services/previewUpload'
import { repeatFit } from '../../server/services/repeatFit'
import { showFit } from '../../server/services/showFit'
import { signEvidence } from '../../server/services/signEvidence'
import { submitForCheck } from '../../server/services/submitForCheck'
import { traceNumber } from '../../server/services/traceNumber'
import { makeDeps, makeProgramme } from '../support/factory'
import { toyKind } from '../support/toyKind'
import { GLOW_DRAFT, glowTable, makeAgent, runJobs, stage, upload } from '../support/uploads'

const deps = makeDeps({ kinds: { [toyKind.kind]: toyKind } })
afterAll(() => deps.close())

describe('a measurement kind that only its own file knows', () => {
  it('walks from its template through preview, store, fit, repeat, check and signature to evidence that a partner reads [architecture: five registries]', async () => {
    const programme = await makeProgramme(deps)
    const { chemist, physicist } = programme.people
    const agent = await makeAgent(deps, programme)
    expect(await readTemplate(deps, { kind: 'toy.glow', name: 'glow.csv' })).toContain('dwell (s)')
    expect((await describeKinds(deps)).kinds).toMatchObject([{ kind: 'toy.glow', conditions: [{ key: 'temperature_K', unit: '°C', min: -73.15, max: 126.85 }, { key: 'lamp' }] }])

    const id = await stage(deps, programme, glowTable())
    const preview = await previewUpload(deps, { actor: chemist, programmeId: programme.id, id, draft: GLOW_DRAFT })
    expect(preview).toMatchObject({ kind: 'toy.glow', canStore: true, layout: 'long', series: [{ complexCode: 'SK-07', lot: 'L1', tubes: 4 }] })
    expect(preview.columns.map(column => [column.stem, column.unit])).toEqual([['tube', null], ['agent', null], ['batch', null], ['conc', 'mM'], ['dwell', 's'], ['glow', 'au']])

    const { series } = await upload(deps, programme, { content: glowTable(), draft: GLOW_DRAFT })
    await runJobs(deps, programme)
    const where = { programmeId: programme.id, seriesId: series[0]!.id, versionNo: 1 }
    const fit = await showFit(deps, { ...where, scope: 'programme' })
    expect(fit).toMatchObject({ outcome: 'ok', modelId: 'toy.mean', modelVersion: 2, check: { state: 'draft', seq: 0 } })
    expect(fit.series!.headline.value).toBeCloseTo(slopeOf([0, 0.5, 1, 2], [1, 2, 3, 4].map((n, i) => 2 + 5 * [0, 0.5, 1, 2][i]! + 0.5 * n / 12)), 12)
    expect(await repeatFit(deps, { ...where, actor: physicist })).toMatchObject({ same: true, sameEngine: true, differenceCount: 0, relativeDifference: 0 })

    const check = { programmeId: programme.id, kind: 'fit' as const, id: fit.id, comment: '' }
    await submitForCheck(deps, { ...check, actor: chemist, expectedSeq: 0 })
    await signEvidence(deps, { ...check, actor: physicist, expectedSeq: 1 })
    const signed = currentEvidence(await readEvidence(deps.db, programme.id, 'signed', { complexId: agent.complexId }))
    expect(signed).toMatchObject([{ quantity: 'glow_per_mM', signed: true, value: { value: fit.series!.headline.value, unit: 'mM^-1' } }])
    const trace = await traceNumber(deps, { programmeId: programme.id, scope: 'programme', evidenceId: signed[0]!.id })
    expect(JSON.stringify(trace)).toContain(preview.upload.sha256)
    expect(await listSeries(deps, { programmeId: programme.id, scope: 'signed', query: { limit: 50 } }))
      .toMatchObject({ series: [{ kindTitle: 'Glow (toy)', state: 'signed', fileName: null, headline: { signed: true, quantity: 'glow_per_mM' } }] })
  })

  it('says of its problems what it would accept, beside those of the table', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme)
    const id = await stage(deps, programme, 'tube,conc (mM),dwell (s),glow\na,1,1,2\na,1,2,2\n')
    const { problems } = await previewUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, id, draft: { kind: 'toy.glow', complexCode: 'SK-07', lot: 'L1' } })
    expect(problems).toContainEqual(expect.objectContaining({ id: 'toyFew', accepted: 'three tubes', severity: 'blocks' }))
    expect(problems).toContainEqual(expect.objectContaining({ field: 'conditions.temperature_K', message: 'Temperature is missing.' }))
  })
})

function slopeOf(x: number[], y: number[]): number {
  const [mx, my] = [x, y].map(values => values.reduce((a, b) => a + b) / values.length) as [number, number]
  return x.reduce((sum, v, i) => sum + (v - mx) * (y[i]! - my), 0) / x.reduce((sum, v) => sum + (v - mx) ** 2, 0)
}

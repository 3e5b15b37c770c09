import { afterAll, describe, expect, it } from 'vitest'
import { currentEvidence } from '../../shared/evidence/item'
import { FitDto, FitRequest } from '../../shared/schemas/fit'
import { SeriesDto } from '../../shared/schemas/series'
import { readEvidence } from '../../server/queries/evidence'
import { previewUpload } from '../../server/services/previewUpload'
import { repeatFit } from '../../server/services/repeatFit'
import { requestFit } from '../../server/services/requestFit'
import { showCheck } from '../../server/services/showCheck'
import { showFit } from '../../server/services/showFit'
import { showSeries } from '../../server/services/showSeries'
import { signEvidence } from '../../server/services/signEvidence'
import { submitForCheck } from '../../server/services/submitForCheck'
import { makeDeps, makeProgramme } from '../support/factory'
import { register } from '../support/registry'
import { runJobs, stage, upload } from '../support/uploads'
import { longTable, simulate, wideTable } from '../support/zSpectrumTables'

const deps = makeDeps()
afterAll(() => deps.close())

const OWNER = { complexCode: 'SK-31', lot: 'L1' }
const K = 1200

describe('the way of Z-spectra [issue 5]', () => {
  it('goes from a file of spectra through preview, fit, repeat and signature to an exchange rate on the agent', async () => {
    const programme = await makeProgramme(deps)
    await register(deps, programme, { code: OWNER.complexCode })
    const content = longTable(simulate({ k_per_s: K })).join('\n')
    const id = await stage(deps, programme, content)
    const preview = await previewUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, id, draft: { kind: 'exchange.zspectrum', ...OWNER } })
    expect(preview).toMatchObject({ canStore: true, layout: 'long', series: [{ tubes: 1, title: 'Z-spectra, +50 ppm, 7 T, 25 °C' }] })

    const { series } = await upload(deps, programme, { content, draft: { kind: 'exchange.zspectrum', ...OWNER } })
    await runJobs(deps, programme)
    const seriesId = series[0]!.id
    const read = async (versionNo: number) => FitDto.parse(await showFit(deps, { programmeId: programme.id, scope: 'programme', seriesId, versionNo }))
    const fit = await read(1)
    expect(fit.outcome).toBe('ok')
    expect(fit.series!.headline).toMatchObject({ name: 'kex_per_s', kind: '=', unit: 's^-1' })
    expect(Math.abs(fit.series!.headline.value / K - 1)).toBeLessThan(0.05)
    expect(fit.evidence.map(item => item.quantity)).toEqual(['kex_per_s'])
    expect(fit.series!.headline.evidenceId).toBe(fit.evidence[0]!.id)
    expect(fit.evidence[0]!.conditions).toMatchObject({ pH: 7.4, temperature_K: 298.15, b0_T: 7 })
    expect(fit.tubes[0]!.small.title).toBe('t1')
    expect(fit.seriesFigure).toMatchObject({ x: { label: 'B_1', unit: 'µT' } })
    expect(await repeatFit(deps, { actor: programme.people.physicist, programmeId: programme.id, seriesId, versionNo: 1 })).toMatchObject({ same: true, differenceCount: 0 })
    const shown = SeriesDto.parse(await showSeries(deps, { programmeId: programme.id, scope: 'programme', seriesId }))
    expect(shown.words.title).toBe('Exchange rate')

    const check = { programmeId: programme.id, kind: 'fit' as const, id: fit.id, comment: '' }
    expect((await showCheck(deps, { actor: programme.people.physicist, ...check })).description).toContain('Z-spectra')
    await submitForCheck(deps, { ...check, actor: programme.people.chemist, expectedSeq: 0 })
    await signEvidence(deps, { ...check, actor: programme.people.physicist, expectedSeq: 1 })
    const [signed] = currentEvidence(await readEvidence(deps.db, programme.id, 'signed'))
    expect(signed).toMatchObject({ quantity: 'kex_per_s', signed: true })
    expect(signed!.value.value).toBe(fit.series!.headline.value)
  })

  it('stores a column per spectrum, fits it by the global fit where that is asked for, and says so', async () => {
    const programme = await makeProgramme(deps)
    await register(deps, programme, { code: OWNER.complexCode })
    const { series } = await upload(deps, programme, { content: wideTable(simulate({ k_per_s: K, b1s_uT: [2, 5, 10] })).join('\n'), draft: { kind: 'exchange.zspectrum', ...OWNER } })
    await runJobs(deps, programme)
    const seriesId = series[0]!.id
    await requestFit(deps, { actor: programme.people.chemist, programmeId: programme.id, seriesId, request: FitRequest.parse({ modelId: 'global' }) })
    await runJobs(deps, programme)
    const fit = FitDto.parse(await showFit(deps, { programmeId: programme.id, scope: 'programme', seriesId, versionNo: 2 }))
    expect(fit.outcome).toBe('ok')
    expect(Math.abs(fit.series!.headline.value / K - 1)).toBeLessThan(0.05)
    expect(fit.evidence[0]!.detail.method).toBe('Bloch–McConnell, all spectra')
    expect(fit.tubes).toHaveLength(3)
  })
})

import { afterAll, describe, expect, it } from 'vitest'
import { readEvidence } from '../../server/queries/evidence'
import { correctConditions } from '../../server/services/correctConditions'
import { listSeries } from '../../server/services/listSeries'
import { requestFit } from '../../server/services/requestFit'
import { showFit } from '../../server/services/showFit'
import { showSeries } from '../../server/services/showSeries'
import { signEvidence } from '../../server/services/signEvidence'
import { submitForCheck } from '../../server/services/submitForCheck'
import { withdrawSeries } from '../../server/services/withdrawSeries'
import { FitRequest } from '../../shared/schemas/fit'
import { CorrectRequest, SeriesQuery } from '../../shared/schemas/series'
import { refusal } from '../support/actors'
import { makeDeps, makeProgramme } from '../support/factory'
import { toyKind } from '../support/toyKind'
import { GLOW_DRAFT, glowTable, makeAgent, runJobs, upload } from '../support/uploads'

const deps = makeDeps({ kinds: { [toyKind.kind]: toyKind } })
afterAll(() => deps.close())

const REASON = 'The thermometer was read wrongly.'

async function stored({ signed = false } = {}) {
  const programme = await makeProgramme(deps)
  const agent = await makeAgent(deps, programme)
  const { series } = await upload(deps, programme, { content: glowTable(), draft: GLOW_DRAFT })
  await runFits(programme)
  const seriesId = series[0]!.id
  const { chemist, physicist } = programme.people
  const at = { programmeId: programme.id, seriesId }
  if (signed) {
    const { id } = await showFit(deps, { ...at, scope: 'programme', versionNo: 1 })
    const check = { programmeId: programme.id, kind: 'fit' as const, id, comment: '' }
    await submitForCheck(deps, { ...check, actor: chemist, expectedSeq: 0 })
    await signEvidence(deps, { ...check, actor: physicist, expectedSeq: 1 })
  }
  return { programme, agent, seriesId, at, chemist, physicist }
}

const runFits = runJobs.bind(null, deps)
const list = (programmeId: string, query: object = {}, scope: 'programme' | 'signed' = 'programme') => listSeries(deps, { programmeId, scope, query: SeriesQuery.parse(query) })

describe('correcting what was typed', () => {
  it('replaces the series, fits it afresh with the same points left out, and takes the signed number out of what counts [architecture: states]', async () => {
    const { programme, at, chemist, physicist, agent } = await stored({ signed: true })
    await requestFit(deps, { ...at, actor: physicist, request: FitRequest.parse({ exclusions: [{ tubeNo: 4, pointIndex: 2, reason: 'Air bubble in the last reading.' }] }) })
    await runFits(programme)
    expect(await readEvidence(deps.db, programme.id, 'signed', { complexId: agent.complexId })).toHaveLength(1)
    const corrected = await correctConditions(deps, { ...at, actor: chemist, request: CorrectRequest.parse({ conditions: { temperature_K: 300.15 }, tubes: [{ tubeNo: 4, conc_mM: 2.5, concSe_mM: null }], reason: REASON }) })
    await runFits(programme)
    expect(await readEvidence(deps.db, programme.id, 'signed', { complexId: agent.complexId })).toEqual([])
    const series = await showSeries(deps, { programmeId: programme.id, scope: 'programme', seriesId: corrected.id })
    expect(series).toMatchObject({ replaces: at.seriesId, title: 'glow, 27 °C', isWithdrawn: false, recordedBy: chemist.name })
    expect(series.conditions).toMatchObject([{ key: 'temperature_K', value: 300.15, shown: '27\u00A0°C' }])
    expect(series.tubes.map(tube => tube.conc_mM)).toEqual([0, 0.5, 1, 2.5])
    const fit = await showFit(deps, { programmeId: programme.id, scope: 'programme', seriesId: corrected.id, versionNo: 1 })
    expect(fit.exclusions).toMatchObject([{ tubeNo: 4, pointIndex: 2, personName: physicist.name }])
    expect(await showSeries(deps, { programmeId: programme.id, scope: 'programme', seriesId: at.seriesId })).toMatchObject({ replacedBy: corrected.id, conditions: [{ value: 310.15 }], events: [{ event: 'recorded' }, { event: 'conditionsCorrected', reason: REASON }] })
    expect((await list(programme.id)).series.map(one => one.id)).toEqual([corrected.id])
  })

  it('refuses a second correction of the same series, naming who came first, and anything else done to it', async () => {
    const { at, chemist, physicist } = await stored()
    const request = CorrectRequest.parse({ conditions: { temperature_K: 300 }, reason: REASON })
    const both = await Promise.allSettled([correctConditions(deps, { ...at, actor: chemist, request }), correctConditions(deps, { ...at, actor: chemist, request })])
    expect(both.filter(one => one.status === 'fulfilled')).toHaveLength(1)
    expect(both.find(one => one.status === 'rejected')).toMatchObject({ reason: { code: 'conflict' } })
    expect(await refusal(requestFit(deps, { ...at, actor: physicist, request: FitRequest.parse({}) }))).toMatchObject({ code: 'conflict' })
    expect(await refusal(withdrawSeries(deps, { ...at, actor: chemist, reason: REASON }))).toMatchObject({ code: 'conflict' })
  })

  it.each([
    ['nothing that differs', { conditions: { temperature_K: 310.15 } }],
    ['a value outside its range', { conditions: { temperature_K: 900 } }],
    ['a condition that the kind does not have', { conditions: { phase: 1 } }],
    ['a required condition taken away', { conditions: { temperature_K: null } }],
    ['a tube that is not there', { tubes: [{ tubeNo: 9, conc_mM: 1, concSe_mM: null }] }],
  ])('refuses %s and says what it would accept', async (_, body) => {
    const { at, chemist } = await stored()
    const error = await correctConditions(deps, { ...at, actor: chemist, request: CorrectRequest.parse({ ...body, reason: REASON }) }).catch(refused => refused as { code: string, details: { accepted: string } })
    expect(error).toMatchObject({ code: 'invalidInput', details: { accepted: expect.stringMatching(/.+/) } })
  })
})

describe('withdrawing', () => {
  it('is refused while a signed number rests on the series, with who signed and when', async () => {
    const { at, chemist, physicist } = await stored({ signed: true })
    expect(await refusal(withdrawSeries(deps, { ...at, actor: chemist, reason: REASON }))).toMatchObject({ code: 'conflict', data: { personName: physicist.name, versionNo: 1, at: deps.clock.now().toISOString() } })
  })

  it('takes an unsigned series out of what counts, once; it stays to be read', async () => {
    const { programme, at, chemist } = await stored()
    await withdrawSeries(deps, { ...at, actor: chemist, reason: REASON })
    expect(await readEvidence(deps.db, programme.id, 'programme')).toEqual([])
    expect((await list(programme.id)).series).toMatchObject([{ id: at.seriesId, state: 'withdrawn' }])
    expect(await refusal(withdrawSeries(deps, { ...at, actor: chemist, reason: REASON }))).toMatchObject({ code: 'conflict' })
    expect((await showSeries(deps, { ...at, scope: 'programme' })).events.at(-1)).toMatchObject({ event: 'withdrawn', reason: REASON, personName: chemist.name })
  })
})

describe('the list of series', () => {
  it('pages without loss or repeat, filters, and shows a partner signed series without file names', async () => {
    const { programme, at } = await stored({ signed: true })
    await makeAgent(deps, programme, { code: 'SK-08' })
    for (let i = 0; i < 3; i++) await upload(deps, programme, { content: glowTable({ agent: 'SK-08', noise: i }), draft: GLOW_DRAFT })
    const seen: string[] = []
    for (let before: string | undefined, page = await list(programme.id, { limit: 2 }); ; page = await list(programme.id, { limit: 2, before })) {
      seen.push(...page.series.map(one => one.id))
      if (page.next === null) break
      before = page.next
    }
    expect(new Set(seen).size).toBe(4)
    expect(seen).toHaveLength(4)
    expect((await list(programme.id, { agent: 'SK-08' })).series).toHaveLength(3)
    expect((await list(programme.id, { state: 'signed' })).series.map(one => one.id)).toEqual([at.seriesId])
    expect((await list(programme.id, { state: 'fitting' })).series).toHaveLength(3)
    expect(await list(programme.id, {}, 'signed')).toMatchObject({ agents: ['SK-07'], series: [{ id: at.seriesId, state: 'signed', fileName: null, headline: { signed: true, versionNo: 1 } }] })
  })

  it('tells a partner nothing of a newer, unsigned version', async () => {
    const { programme, at, physicist } = await stored({ signed: true })
    await requestFit(deps, { ...at, actor: physicist, request: FitRequest.parse({ modelId: 'toy.drift' }) })
    await runFits(programme)
    expect((await list(programme.id)).series).toMatchObject([{ versionNo: 2, state: 'draft', headline: { versionNo: 1, signed: true } }])
    expect((await list(programme.id, {}, 'signed')).series).toMatchObject([{ versionNo: 1, state: 'signed' }])
    const series = await showSeries(deps, { ...at, scope: 'signed' })
    expect(series).toMatchObject({ file: null, events: [], versions: [{ versionNo: 1 }] })
    expect(await refusal(showFit(deps, { ...at, scope: 'signed', versionNo: 2 }))).toMatchObject({ code: 'notFound' })
  })
})

import { afterAll, describe, expect, it } from 'vitest'
import { FitPayload } from '../../server/jobs/fitRun'
import { toBinary } from '../../server/platform/ids'
import { claimJob, findJob } from '../../server/queries/jobs'
import { seriesTubes } from '../../server/queries/series'
import { confirmUpload } from '../../server/services/confirmUpload'
import { analysisInput, loadSeries } from '../../server/services/fitInput'
import { storeFit } from '../../server/services/storeFit'
import { showPresets } from '../../server/services/showPresets'
import { removePreset, savePreset } from '../../server/services/savePreset'
import { showSeries } from '../../server/services/showSeries'
import { verifyAudit } from '../../server/services/verifyAudit'
import { refusal } from '../support/actors'
import { failEachQuery } from '../support/faults'
import { makeDeps, makeProgramme, type TestProgramme } from '../support/factory'
import { toyKind } from '../support/toyKind'
import { GLOW_DRAFT, glowTable, makeAgent, makeBatch, stage, upload } from '../support/uploads'

const deps = makeDeps({ kinds: { [toyKind.kind]: toyKind } })
afterAll(() => deps.close())

/** Rows of a programme in every table that storing an upload writes, and jobs for fits. */
async function stored(programme: TestProgramme): Promise<Record<string, number>> {
  const counts: Record<string, number> = {}
  for (const table of ['upload', 'series', 'series_event', 'tube', 'instrument', 'fit', 'fit_input', 'exclusion', 'evidence']) {
    const row = await deps.db(table).where({ programme_id: toBinary(programme.id) }).count({ n: '*' }).first() as { n: number }
    counts[table] = Number(row.n)
  }
  const jobs = await deps.db('job').where({ programme_id: toBinary(programme.id), kind: 'fit.run' }).count({ n: '*' }).first() as { n: number }
  return { ...counts, job: Number(jobs.n) }
}
const NOTHING = { upload: 0, series: 0, series_event: 0, tube: 0, instrument: 0, fit: 0, fit_input: 0, exclusion: 0, evidence: 0, job: 0 }

const TWO_AGENTS = ['tube,agent,lot,conc (mM),dwell (s),glow', 'blank,,,0,1,2', 'blank,,,0,2,2.1',
  ...['SK-07,L1', 'SK-07,L2', 'SK-08,L1'].flatMap((owner, k) => [1, 2, 4].flatMap(conc => [1, 2].map(dwell => `${owner.replace(',', '')}-${conc},${owner},${conc},${dwell},${2 + (k + 1) * conc}`)))].join('\n')

describe('confirming', () => {
  it('stores one series for each agent and batch, each with its own copy of the shared blank [issue: way 2]', async () => {
    const programme = await makeProgramme(deps)
    const agent = await makeAgent(deps, programme)
    await makeBatch(deps, programme, { complexId: agent.complexId, lot: 'L2' })
    await makeAgent(deps, programme, { code: 'SK-08' })
    const { series } = await upload(deps, programme, { content: TWO_AGENTS, draft: GLOW_DRAFT })
    expect(series.map(one => [one.agentCode, one.lot])).toEqual([['SK-07', 'L1'], ['SK-07', 'L2'], ['SK-08', 'L1']])
    for (const one of series) {
      const tubes = await seriesTubes(deps.db, programme.id, one.id)
      expect(tubes.map(tube => [tube.role, tube.conc_mM])).toEqual([['blank', 0], ['sample', 1], ['sample', 2], ['sample', 4]])
      expect(tubes[0]!.points).toEqual({ columns: ['dwell_s', 'glow_au'], rows: [[1, 2], [2, 2.1]] })
    }
    expect(await stored(programme)).toMatchObject({ upload: 1, series: 3, tube: 12, job: 3 })
  })

  it('answers a repeated command as before, and tells a second one who stored it and when', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme)
    const id = await stage(deps, programme, glowTable())
    const input = { actor: programme.people.chemist, programmeId: programme.id, id, draft: GLOW_DRAFT }
    const idempotency = { key: 'key-of-the-click', request: { id } }
    const first = await confirmUpload(deps, { ...input, idempotency })
    expect(await confirmUpload(deps, { ...input, idempotency })).toEqual(first)
    expect(await refusal(confirmUpload(deps, input))).toMatchObject({ code: 'conflict', data: { personName: programme.people.chemist.name, at: deps.clock.now().toISOString() } })
    expect(await stored(programme)).toMatchObject({ upload: 1, series: 1, job: 1 })
  })

  it('stores once when two confirm at the same moment', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme)
    const id = await stage(deps, programme, glowTable())
    const input = { actor: programme.people.chemist, programmeId: programme.id, id, draft: GLOW_DRAFT }
    const answers = await Promise.allSettled([1, 2, 3].map(() => confirmUpload(deps, input)))
    expect(answers.filter(answer => answer.status === 'fulfilled')).toHaveLength(1)
    expect(answers.flatMap(answer => answer.status === 'rejected' ? [(answer.reason as { code: string }).code] : [])).toEqual(['conflict', 'conflict'])
    expect(await stored(programme)).toMatchObject({ upload: 1, series: 1 })
  })

  it('lists every problem and stores nothing, whatever the browser showed', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme)
    const id = await stage(deps, programme, glowTable({ agent: 'XX-99' }).replace(',2,1,12', ',2,1,twelve'))
    const refused = await refusal(confirmUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, id, draft: { kind: 'toy.glow' } }))
    expect(refused.code).toBe('invalidInput')
    const problems = refused.data.problems as { id: string, row: number | null, column: number | null, field: string | null, accepted: string }[]
    expect(problems.find(problem => problem.row === 11)).toMatchObject({ column: 6, accepted: expect.stringContaining('a number such as') })
    expect(problems.find(problem => problem.id === 'unknownAgent')).toMatchObject({ field: 'complexCode', accepted: 'SK-07, or an agent registered first' })
    expect(problems.find(problem => problem.field === 'conditions.temperature_K')).toBeTruthy()
    expect(await stored(programme)).toEqual(NOTHING)
  })

  it('leaves nothing half-stored, whichever query fails, and can be done afterwards [architecture: one transaction each]', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme)
    const id = await stage(deps, programme, glowTable())
    expect(await stored(programme)).toEqual(NOTHING)
    const { failed } = await failEachQuery({
      deps, stored: () => stored(programme), attempt: () => confirmUpload(deps, { actor: programme.people.chemist, programmeId: programme.id, id, draft: GLOW_DRAFT }),
    })
    expect(failed).toBeGreaterThan(12)
    expect(await stored(programme)).toEqual({ ...NOTHING, upload: 1, series: 1, series_event: 1, tube: 4, job: 1 })
    expect(await verifyAudit(deps, programme.id)).toMatchObject({ whole: true })
  })

  it('stores a fit whole or not at all, whichever query fails', async () => {
    const programme = await makeProgramme(deps)
    await makeAgent(deps, programme)
    await upload(deps, programme, { content: glowTable(), draft: GLOW_DRAFT })
    const before = await stored(programme)
    const job = (await claimJob(deps.db, 60, programme.id))!
    const payload = FitPayload.parse(job.payload)
    const loaded = await loadSeries(deps, programme.id, payload.seriesId)
    const input = analysisInput(loaded, payload)
    const fit = { job, programmeId: programme.id, payload, loaded, input, outcome: toyKind.analyse(input) }
    const { failed } = await failEachQuery({ deps, stored: () => stored(programme), attempt: () => storeFit(deps, fit) })
    expect(failed).toBeGreaterThan(8)
    expect(await stored(programme)).toEqual({ ...before, fit: 1, fit_input: 4, evidence: 1 })
    expect(await findJob(deps.db, job.id)).toMatchObject({ state: 'done', error: null })
  })

  it('is invisible to another programme', async () => {
    const [mine, theirs] = [await makeProgramme(deps), await makeProgramme(deps)]
    await makeAgent(deps, mine)
    const { series } = await upload(deps, mine, { content: glowTable(), draft: GLOW_DRAFT })
    expect(await refusal(showSeries(deps, { programmeId: theirs.id, scope: 'programme', seriesId: series[0]!.id }))).toMatchObject({ code: 'notFound' })
    expect(await refusal(showSeries(deps, { programmeId: mine.id, scope: 'signed', seriesId: series[0]!.id }))).toMatchObject({ code: 'notFound' })
  })
})

describe('presets', () => {
  it('save under a name, are replaced under it, start from the last series, and are the programme\'s own', async () => {
    const [programme, other] = [await makeProgramme(deps), await makeProgramme(deps)]
    await makeAgent(deps, programme)
    const { chemist } = programme.people
    await savePreset(deps, { actor: chemist, programmeId: programme.id, preset: { name: 'Warm', kind: 'toy.glow', conditions: { temperature_K: 300 } } })
    const { presets } = await savePreset(deps, { actor: chemist, programmeId: programme.id, preset: { name: 'Warm', kind: 'toy.glow', conditions: { temperature_K: 310.15, lamp: null } } })
    expect(presets).toMatchObject([{ name: 'Warm', conditions: { temperature_K: 310.15 }, savedBy: chemist.name }])
    await upload(deps, programme, { content: glowTable(), draft: { ...GLOW_DRAFT, conditions: { temperature_K: 298.15, lamp: 'blue' } } })
    expect((await showPresets(deps, { programmeId: programme.id, kind: 'toy.glow' })).last?.conditions).toEqual({ temperature_K: 298.15, lamp: 'blue' })
    expect(await showPresets(deps, { programmeId: other.id, kind: 'toy.glow' })).toEqual({ presets: [], instruments: [], last: null })
    expect(await refusal(removePreset(deps, { actor: chemist, programmeId: other.id, id: presets[0]!.id }))).toMatchObject({ code: 'notFound' })
    await removePreset(deps, { actor: chemist, programmeId: programme.id, id: presets[0]!.id })
    expect(await refusal(savePreset(deps, { actor: chemist, programmeId: programme.id, preset: { name: 'x', kind: 'toy.glow', conditions: { phase: 1 } } }))).toMatchObject({ code: 'invalidInput' })
  })
})

import { afterAll, describe, expect, it } from 'vitest'
import { toBinary } from '../../server/platform/ids'
import { findAnything } from '../../server/services/findAnything'
import { requestFit } from '../../server/services/requestFit'
import { showBench } from '../../server/services/showBench'
import { showCheck } from '../../server/services/showCheck'
import type { Actor, Scope } from '../../shared/permissions'
import { BenchDto } from '../../shared/schemas/bench'
import { FitRequest } from '../../shared/schemas/fit'
import { fittedSeries, stepsOf } from '../support/checks'
import { makeDeps, makeProgramme, type TestProgramme } from '../support/factory'
import { rateLawEntry } from '../support/publishedRecords'
import { enter, register } from '../support/registry'
import { toyKind } from '../support/toyKind'
import { GLOW_DRAFT, glowTable, runJobs, stage, upload } from '../support/uploads'

const deps = makeDeps({ kinds: { [toyKind.kind]: toyKind } })
afterAll(() => deps.close())
const bench = async (programme: TestProgramme, actor: Actor = programme.people.chemist) => BenchDto.parse(await showBench(deps, { actor, programmeId: programme.id }))
const order = (way: Awaited<ReturnType<typeof fittedSeries>>) => requestFit(deps, { actor: way.chemist, programmeId: way.programme.id, seriesId: way.seriesId, request: FitRequest.parse({}) })

describe('the bench [product: screens]', () => {
  it('shows a fit from draft to returned to answered, each in one place only', async () => {
    const way = await fittedSeries(deps)
    expect(await bench(way.programme)).toMatchObject({ unsent: [{ id: way.fitId, state: 'draft', mine: true, refusal: null }], returned: [], sent: [] })
    await way.submit(way.fitId)
    expect(await bench(way.programme)).toMatchObject({ unsent: [], returned: [], sent: [{ id: way.fitId, state: 'waiting' }] })
    await way.giveBack(way.fitId)
    expect(await bench(way.programme)).toMatchObject({ unsent: [], sent: [], returned: [{ id: way.fitId, comment: 'The blank reads too low; was it water?', by: way.physicist.name, mine: true, seq: 2 }] })
    const second = await way.refit({}, way.chemist)
    expect(await bench(way.programme)).toMatchObject({ returned: [], unsent: [{ id: second, versionNo: 2 }] })
    await way.submit(second)
    await way.sign(second)
    expect(await bench(way.programme)).toMatchObject({ returned: [], unsent: [], sent: [] })
  })

  it('does not count a version made while checking as unsent work of the chemist', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    await way.refit()
    expect(await bench(way.programme)).toMatchObject({ unsent: [], sent: [{ id: way.fitId }] })
  })

  it('shows fits on their way, refused ones with why, and those that stopped until a later fit answers them', async () => {
    const way = await fittedSeries(deps)
    const { jobId } = await order(way)
    expect((await bench(way.programme)).fits).toMatchObject([{ seriesId: way.seriesId, agentCode: 'TS-01', job: { jobId, state: 'queued' } }])
    await deps.db('job').where({ id: toBinary(jobId) }).update({ state: 'parked', error: 'The lamp is out.' })
    expect((await bench(way.programme)).fits).toMatchObject([{ job: { state: 'parked', error: 'The lamp is out.' } }])
    const out = (tubeNo: number) => ({ tubeNo, pointIndex: null, reason: 'This tube was filled twice.' })
    await way.refit({ exclusions: [out(2), out(3)] }, way.chemist)
    expect(await bench(way.programme)).toMatchObject({ fits: [], unsent: [{ versionNo: 2, refusal: '2 tubes are left.' }] })
  })

  it('keeps staged uploads for their owner alone, until they run out', async () => {
    const programme = await makeProgramme(deps)
    await stage(deps, programme, glowTable(), { fileName: 'monday.csv' })
    expect((await bench(programme)).staged).toMatchObject([{ fileName: 'monday.csv' }])
    expect((await bench(programme, programme.people.physicist)).staged).toEqual([])
    await deps.db('upload_staged').where({ programme_id: toBinary(programme.id) }).update({ expires_at: deps.clock.now() })
    expect((await bench(programme)).staged).toEqual([])
  })

  it('says what each agent lacks and who could measure it; typed records and batches stand among what was not sent', async () => {
    const programme = await makeProgramme(deps)
    const made = await register(deps, programme, { code: 'TS-01', freeMetal: { kind: '<', value_frac: 0.0005, se_frac: null, method: 'xylenol orange', detectionLimit_frac: 0.0005 } })
    const { id } = await enter(deps, programme, { agent: 'TS-01', kind: 'rateLaw', entry: rateLawEntry({ k1_per_M_s: { value: 1 } }) })
    const shown = await bench(programme)
    expect(shown.unsent.map(one => [one.kind, one.id]).sort()).toEqual([['batchVersion', made.batchVersionId], ['record', id]])
    const [agent] = shown.agents
    expect(agent!.gaps!.length).toBeGreaterThan(0)
    expect(agent!.gaps!.every(gap => gap.what && gap.who && gap.why)).toBe(true)
  })

  it('shows the queue to whoever may sign and to nobody else', async () => {
    const way = await fittedSeries(deps)
    await way.submit(way.fitId)
    expect((await bench(way.programme, way.physicist)).queue).toMatchObject([{ id: way.fitId, mine: false }])
    expect((await bench(way.programme)).queue).toBeNull()
  })

  it('of another programme holds nothing of this one', async () => {
    await fittedSeries(deps)
    const other = await makeProgramme(deps)
    expect(await bench(other)).toEqual({ returned: [], unsent: [], sent: [], fits: [], staged: [], queue: null, ground: [], tasks: [], agents: [] })
  })
})

describe('slopes of the agent\'s other series', () => {
  it('stand beside the one checked, at the same conditions, with a test for equal slopes [Draper & Smith 1998, chapter 14]', async () => {
    const way = await fittedSeries(deps)
    const show = () => showCheck(deps, { actor: way.physicist, programmeId: way.programme.id, kind: 'fit', id: way.fitId })
    expect((await show()).others).toBeNull()
    const again = (content: string, temperature_K: number) => upload(deps, way.programme, { content, draft: { ...GLOW_DRAFT, conditions: { temperature_K } } })
    await again(glowTable({ agent: 'TS-01', noise: 0.4 }), 310.15)
    await again(glowTable({ agent: 'TS-01', noise: 0.3 }), 298.15)
    await runJobs(deps, way.programme)
    const { others } = await show()
    expect(others!.others).toMatchObject([{ lot: 'L1', versionNo: 1, state: 'draft' }])
    expect(others!.equal).toMatchObject({ df1: 1, df2: 4 })
    expect(others!.equal!.p).toBeGreaterThan(0)
    expect(others!.equal!.p).toBeLessThanOrEqual(1)
  })
})

describe('find [product: pages]', () => {
  const find = (programme: TestProgramme, text: string, scope: Scope = 'programme') => findAnything(deps, { programmeId: programme.id, scope, text })

  it('looks for agents by code and ligand, series by file, records by kind and source, without regard to case', async () => {
    const way = await fittedSeries(deps)
    await enter(deps, way.programme, { agent: 'TS-01', kind: 'rateLaw', entry: rateLawEntry({ k1_per_M_s: { value: 1 } }) })
    expect(await find(way.programme, 'ts-0')).toMatchObject({ agents: [{ code: 'TS-01' }], series: [{ id: way.seriesId, fileName: 'table.csv' }], records: [{ agentCode: 'TS-01' }], more: false })
    expect((await find(way.programme, 'a test LIGAND')).agents).toHaveLength(1)
    expect(await find(way.programme, 'TABLE.csv')).toMatchObject({ agents: [], series: [{ id: way.seriesId }] })
    expect(await find(way.programme, 'test source')).toMatchObject({ agents: [], records: [{ agentCode: 'TS-01' }] })
    expect((await find(way.programme, 'rate law')).records).toHaveLength(1)
  })

  it('takes what is typed as text, not as a pattern', async () => {
    const way = await fittedSeries(deps)
    for (const text of ['%', '_', '\\', '\'; --']) expect(await find(way.programme, text), text).toEqual({ agents: [], series: [], records: [], more: false })
  })

  it('shows a partner what is signed, without file names and not by them', async () => {
    const way = await fittedSeries(deps)
    expect(await find(way.programme, 'TS-01', 'signed')).toEqual({ agents: [], series: [], records: [], more: false })
    await way.submit(way.fitId)
    await way.sign(way.fitId)
    const { id } = await enter(deps, way.programme, { agent: 'TS-01', kind: 'rateLaw', entry: rateLawEntry({ k1_per_M_s: { value: 1 } }) })
    expect(await find(way.programme, 'TS-01', 'signed')).toMatchObject({ agents: [{ code: 'TS-01' }], series: [{ fileName: null }], records: [] })
    expect((await find(way.programme, 'table.csv', 'signed')).series).toEqual([])
    const record = stepsOf(deps, way.programme, 'record')
    await record.submit(id)
    await record.sign(id)
    expect((await find(way.programme, 'TS-01', 'signed')).records).toHaveLength(1)
  })

  it('finds nothing of another programme', async () => {
    await fittedSeries(deps)
    expect(await find(await makeProgramme(deps), 'TS')).toMatchObject({ agents: [], series: [], records: [] })
  })
})

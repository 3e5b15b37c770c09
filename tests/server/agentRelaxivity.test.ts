import { afterAll, describe, expect, it } from 'vitest'
import { agentRelaxivity } from '../../server/services/agentRelaxivity'
import { compareFits } from '../../server/services/compareFits'
import { requestFit } from '../../server/services/requestFit'
import { FitRequest } from '../../shared/schemas/fit'
import { refusal } from '../support/actors'
import { makeDeps, makeProgramme } from '../support/factory'
import { echoText, recoveryText } from '../support/phantoms'
import { makeAgent, makeBatch, runJobs, upload } from '../support/uploads'

const deps = makeDeps()
afterAll(() => deps.close())

async function twoBatches(second_r1 = 4.2) {
  const programme = await makeProgramme(deps)
  const agent = await makeAgent(deps, programme)
  await makeBatch(deps, programme, { complexId: agent.complexId, lot: 'L2' })
  await upload(deps, programme, { content: recoveryText({ seed: 'first' }), draft: { kind: 'relax.t1.ir' } })
  await upload(deps, programme, { content: recoveryText({ seed: 'second', lot: 'L2', r1: second_r1 }), draft: { kind: 'relax.t1.ir' } })
  const { series } = await upload(deps, programme, { content: echoText({ seed: 'echoes' }), draft: { kind: 'relax.t2.echo' } })
  await runJobs(deps, programme)
  return { programme, t2SeriesId: series[0]!.id }
}
const read = (programmeId: string, scope: 'programme' | 'signed' = 'programme') => agentRelaxivity(deps, { programmeId, scope, code: 'SK-07' })

describe('relaxivities of an agent, laid together', () => {
  it('are compared and pooled where they were measured alike, the preparations counted', async () => {
    const { programme } = await twoBatches()
    const { groups } = await read(programme.id)
    expect(groups.map(group => [group.quantity, group.series.map(one => one.lot)])).toEqual([['r1_per_mM_s', ['L1', 'L2']], ['r2_per_mM_s', ['L1']]])
    const [r1, r2] = groups
    expect(r1!.pooled).toMatchObject({ preparations: 2 })
    expect(Math.abs(r1!.pooled!.value - 4.2)).toBeLessThan(3 * r1!.pooled!.se!)
    expect(r1!.agree).toMatchObject({ df1: 1, stocks: 2 })
    expect(r1!.agree!.p).toBeGreaterThan(0.01)
    expect(r1!.parallel!.p).toBeGreaterThan(0.001)
    expect(r1!.series[0]).toMatchObject({ tubes: 5, range_mM: [0, 2] })
    expect([r2!.pooled, r2!.agree, r2!.parallel]).toEqual([null, null, null])
  })
  it('are said to differ where they do', async () => {
    const { programme } = await twoBatches(4.6)
    expect((await read(programme.id)).groups[0]!.agree!.p).toBeLessThan(0.01)
  })
  it('give r2/r1 of one batch by a paired bootstrap, the same each time and near the truth', async () => {
    const { programme } = await twoBatches()
    const { ratios } = await read(programme.id)
    expect(ratios).toMatchObject([{ lot: 'L1', method: 'bootstrap', tubes: 5 }])
    expect(Math.abs(ratios[0]!.value - 5.4 / 4.2)).toBeLessThan(4 * ratios[0]!.se!)
    expect((await read(programme.id)).ratios).toEqual(ratios)
  })
  it('are shown to a partner when they are signed, and not before; an unknown agent is not found', async () => {
    const { programme } = await twoBatches()
    expect(await read(programme.id, 'signed')).toEqual({ groups: [], ratios: [] })
    expect(await refusal(agentRelaxivity(deps, { programmeId: programme.id, scope: 'programme', code: 'SK-99' }))).toMatchObject({ code: 'notFound' })
  })
})

describe('two models of one series', () => {
  it('lie side by side with their curves over each other, AICc weights that add up, and an F-test where one contains the other', async () => {
    const { programme, t2SeriesId } = await twoBatches()
    await requestFit(deps, { actor: programme.people.physicist, programmeId: programme.id, seriesId: t2SeriesId, request: FitRequest.parse({ modelId: 'multiEchoOffset', options: { interval: 'profile' } }) })
    await runJobs(deps, programme)
    const compared = await compareFits(deps, { programmeId: programme.id, seriesId: t2SeriesId, versions: [1, 2] })
    expect(compared.samePoints).toBe(true)
    expect(compared.a.weight! + compared.b.weight!).toBeCloseTo(1, 12)
    expect(compared.fTest).toMatchObject({ simpler: 'a', df1: 5 })
    expect([compared.a.options, compared.b.options]).toEqual([[], ['Interval: profile of the sum of squares']])
    expect(compared.tubes[1]!.figure!.layers.filter(layer => layer.type === 'line').map(layer => layer.name)).toEqual(['v1', 'v2'])
  })

  it('have the residuals of both beside each point, also behind a point that one of them leaves out', async () => {
    const { programme, t2SeriesId } = await twoBatches()
    const exclusions = [{ tubeNo: 2, pointIndex: 3, reason: 'Motion during this image' }]
    await requestFit(deps, { actor: programme.people.physicist, programmeId: programme.id, seriesId: t2SeriesId, request: FitRequest.parse({ exclusions }) })
    await runJobs(deps, programme)
    const compared = await compareFits(deps, { programmeId: programme.id, seriesId: t2SeriesId, versions: [1, 2] })
    const rows = compared.tubes.find(tube => tube.tubeNo === 2)!.figure!.table!.rows
    expect(rows.map(row => row.other === null)).toEqual(rows.map((_, i) => i === 3))
  })
})

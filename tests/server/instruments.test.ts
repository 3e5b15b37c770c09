import { afterAll, describe, expect, it } from 'vitest'
import { listInstruments, nameReferenceTube, showInstrument } from '../../server/services/instruments'
import { showFit } from '../../server/services/showFit'
import { withdrawSeries } from '../../server/services/withdrawSeries'
import { refusal } from '../support/actors'
import { makeDeps, makeProgramme, type TestProgramme } from '../support/factory'
import { recoveryText } from '../support/phantoms'
import { makeAgent, runJobs, upload } from '../support/uploads'

const deps = makeDeps()
afterAll(() => deps.close())

const NAMED = { label: 'REF', contents: '0.26 mM manganese in water', since: '2026-01-01', reason: 'Sealed in January, stable since.', expectedSeq: 0 }
const KIND = { kind: 'relax.t1.ir' }

/** A programme whose bay 3 was measured so many times, the reference tube reading the T1 given. */
async function sessions(times_s: readonly number[]): Promise<{ programme: TestProgramme, id: string, series: string[] }> {
  const programme = await makeProgramme(deps)
  await makeAgent(deps, programme)
  const series: string[] = []
  for (const [i, referenceT1_s] of times_s.entries()) {
    const stored = await upload(deps, programme, { content: recoveryText({ seed: `session ${i}`, referenceT1_s, date: `2026-02-${String(i + 1).padStart(2, '0')}` }), draft: KIND })
    series.push(stored.series[0]!.id)
  }
  await runJobs(deps, programme)
  const { instruments } = await listInstruments(deps, { programmeId: programme.id })
  return { programme, id: instruments[0]!.id, series }
}

describe('the reference tube of an instrument', () => {
  it('is named with a reason, and what was named before stays', async () => {
    const { programme, id } = await sessions([0.43])
    const { chemist, physicist } = programme.people
    const name = (request: typeof NAMED) => nameReferenceTube(deps, { actor: chemist, programmeId: programme.id, id, request })
    expect((await name(NAMED)).reference).toMatchObject({ label: 'REF', since: '2026-01-01', by: chemist.name })
    expect(await refusal(nameReferenceTube(deps, { actor: physicist, programmeId: programme.id, id, request: NAMED }))).toMatchObject({ code: 'conflict' })
    const again = await name({ ...NAMED, label: 'REF 2', since: '2026-02-01', reason: 'The old tube was dropped.', expectedSeq: 1 })
    expect(again.history.map(one => one.label)).toEqual(['REF 2', 'REF'])
  })

  it('is nobody else\'s: another programme has no such instrument', async () => {
    const { id } = await sessions([0.43])
    const other = await makeProgramme(deps)
    expect(await refusal(showInstrument(deps, { programmeId: other.id, id }))).toMatchObject({ code: 'notFound' })
    expect(await refusal(nameReferenceTube(deps, { actor: other.people.chemist, programmeId: other.id, id, request: NAMED }))).toMatchObject({ code: 'notFound' })
  })
})

describe('its control chart', () => {
  it('follows T1 of the tube by session; one outside two SD flags its series, for staff and not for partners [product: check 4]', async () => {
    const { programme, id, series } = await sessions([0.431, 0.4295, 0.4305, 0.432, 0.4298, 0.431, 0.447])
    const before = await showInstrument(deps, { programmeId: programme.id, id })
    expect(before.charts).toEqual([])
    await nameReferenceTube(deps, { actor: programme.people.physicist, programmeId: programme.id, id, request: NAMED })
    const { charts } = await showInstrument(deps, { programmeId: programme.id, id })
    expect(charts).toHaveLength(1)
    expect(charts[0]).toMatchObject({ quantity: 't1_s', baseCount: 7, temperature_K: 310.15 })
    expect(charts[0]!.sessions.map(one => one.isOutside)).toEqual([false, false, false, false, false, false, true])
    expect(charts[0]!.sessions[0]!.value).toBeCloseTo(0.431, 2)
    const flagsOf = async (seriesId: string, scope: 'programme' | 'signed' = 'programme') => (await showFit(deps, { programmeId: programme.id, scope, seriesId, versionNo: 1 })).flags.filter(flag => flag.id === 'session')
    expect((await flagsOf(series.at(-1)!))[0]!.sentence).toMatch(/T1 of REF is 0\.44\d+.s on 2026-02-07, [\d.]+ SD from the mean of the base sessions at 37/)
    expect(await flagsOf(series[0]!)).toEqual([])
    const { tubes } = await showFit(deps, { programmeId: programme.id, scope: 'programme', seriesId: series[0]!, versionNo: 1 })
    expect(tubes.map(tube => tube.role)).toEqual(['blank', 'sample', 'sample', 'sample', 'sample', 'reference'])
    expect((await listInstruments(deps, { programmeId: programme.id })).instruments[0]).toMatchObject({ referenceLabel: 'REF', sessions: 7, isOutside: true })
  })

  it('leaves out withdrawn series and what was measured before the tube counts', async () => {
    const { programme, id, series } = await sessions([0.43, 0.431, 0.432])
    await nameReferenceTube(deps, { actor: programme.people.physicist, programmeId: programme.id, id, request: { ...NAMED, since: '2026-02-02' } })
    const count = async () => (await showInstrument(deps, { programmeId: programme.id, id })).charts.flatMap(chart => chart.sessions).length
    expect(await count()).toBe(2)
    await withdrawSeries(deps, { actor: programme.people.chemist, programmeId: programme.id, seriesId: series[2]!, reason: 'Wrong protocol was loaded.' })
    expect(await count()).toBe(1)
  })

  it('counts a file once, however many agents are in it, and keeps temperatures apart', async () => {
    const { programme, id } = await sessions([0.43])
    await makeAgent(deps, programme, { code: 'SK-08' })
    await nameReferenceTube(deps, { actor: programme.people.physicist, programmeId: programme.id, id, request: NAMED })
    const two = recoveryText({ seed: 'a', referenceT1_s: 0.43 }).trimEnd() + '\n' + recoveryText({ seed: 'b', agent: 'SK-08', concs: [0.25, 0.5, 1, 2] }).split('\n').slice(12).filter(Boolean).map(line => line.replace(/^t/, 'u')).join('\n') + '\n'
    const stored = await upload(deps, programme, { content: two, draft: KIND })
    expect(stored.series).toHaveLength(2)
    await upload(deps, programme, { content: recoveryText({ seed: 'cold', referenceT1_s: 0.33, temperature: '25.0 °C' }), draft: KIND })
    await runJobs(deps, programme)
    const { charts } = await showInstrument(deps, { programmeId: programme.id, id })
    expect(charts.map(chart => [Math.round(chart.temperature_K!), chart.sessions.length])).toEqual([[310, 2], [298, 1]])
  })
})

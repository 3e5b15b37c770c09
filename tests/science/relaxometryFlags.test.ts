import { describe, expect, it } from 'vitest'
import { fitModel } from '../../shared/science/least-squares/fitModel'
import type { FitDone } from '../../shared/science/least-squares/outcome'
import type { Model } from '../../shared/science/models/define'
import { MODELS } from '../../shared/science/models/index'
import { createRandom } from '../../shared/science/random'
import { BLANK_RANGES, findBlankRanges } from '../../shared/science/relaxometry/blankRanges'
import { reportFlags, type TubeContext } from '../../shared/science/relaxometry/flags'
import { INVERSION_FLAGS } from '../../shared/science/relaxometry/tubeFlags'
import { fitRecovery } from '../../shared/science/relaxometry/polarity'
import { runsP } from '../../shared/science/relaxometry/runsTest'

const recovery = MODELS.inversionRecovery3 as Model
const TI_S = [0.03, 0.06, 0.12, 0.2, 0.35, 0.5, 0.8, 1.2, 1.8, 2.6, 4, 6]

interface Tube { ti_s?: readonly number[], t1_s?: number, sd?: number, change?: (y: number[]) => number[], exclude?: number[] }

function contextOf({ ti_s = TI_S, t1_s = 0.9, sd = 5, change = y => y, exclude = [] }: Tube = {}, more: Partial<TubeContext> = {}): TubeContext {
  const random = createRandom('flags')
  const signal_au = change(ti_s.map(ti => recovery.evaluate(ti, { a_au: 1000, b_au: -1940, t1_s }) + sd * random.normal()))
  const fit = fitModel(recovery, { x: ti_s, y: signal_au, exclude }, { secondOpinion: true })
  if (!fit.ok) throw new Error(fit.message)
  const t1 = fit.parameters.find(one => one.name === 't1_s') ?? null
  return { fit, x: ti_s, signal_au, headline: t1, curveTime_s: t1?.value ?? null, polarity: null, alternative: null, withOffset: null, noise: { sigma_au: fit.sigma ?? sd, source: 'scatter about the curve' }, blankRanges: [], isBlank: false, ...more }
}
const raised = (context: TubeContext) => reportFlags(INVERSION_FLAGS, context).filter(flag => flag.state === 'raised').map(flag => flag.id)

describe('flags of a tube', () => {
  it('passes every flag that applies to a good tube, and reports them all with what was found', () => {
    const reports = reportFlags(INVERSION_FLAGS, contextOf())
    expect(reports.map(r => r.id)).toEqual(INVERSION_FLAGS.map(flag => flag.id))
    expect(reports.filter(r => r.state === 'raised')).toEqual([])
    expect(reports.filter(r => r.state === 'notApplicable').map(r => r.id)).toEqual(['blankOutside', 'polarity'])
    for (const { detail, state, advice } of reports) {
      expect(advice).toMatch(/\.$/)
      if (state === 'passed') expect(detail).toMatch(/\.$/)
    }
  })
  it('names sampling that stops before 3·T1 or starts after T1', () => {
    expect(raised(contextOf({ t1_s: 2.2, sd: 0.5 }))).toEqual(['shortSampling'])
    expect(raised(contextOf({ t1_s: 0.05, ti_s: [0.06, 0.08, 0.1, 0.13, 0.17, 0.25, 0.4], sd: 0.1 }))).toContain('lateStart')
  })
  it('counts the points used, not the points there are', () => {
    expect(raised(contextOf({ exclude: [0, 1, 2, 3, 5, 7, 9, 10] }))).toContain('fewPoints')
  })
  it('names an error above 5 % and a signal under 5 σ', () => {
    expect(raised(contextOf({ sd: 150 }))).toContain('largeError')
    expect(raised(contextOf({}, { noise: { sigma_au: 300, source: 'background' } }))).toContain('weakSignal')
    const report = reportFlags(INVERSION_FLAGS, contextOf({}, { noise: { sigma_au: 300, source: 'background' } })).find(r => r.id === 'weakSignal')!
    expect(report.detail).toContain('background')
  })
  it('names the outlying point and not its neighbours [Bonferroni t]', () => {
    const reports = reportFlags(INVERSION_FLAGS, contextOf({ change: y => y.with(6, y[6]! + 80) }))
    expect(reports.find(r => r.id === 'outlier')).toMatchObject({ state: 'raised', detail: expect.stringContaining('Point 7') })
  })
  it('names residuals in runs where the wrong model is fitted', () => {
    const ti_s = Array.from({ length: 24 }, (_, i) => 0.03 * 1.26 ** i)
    const twoPools = ti_s.map(ti => 1000 - 1200 * Math.exp(-ti / 0.15) - 740 * Math.exp(-ti / 2))
    expect(raised(contextOf({ ti_s, change: () => twoPools }))).toContain('runs')
  })
  it('names a parameter on a bound and a missing interval', () => {
    const found = raised(contextOf({ change: y => y.map((_, i) => 50 * TI_S[i]! + (i % 2)) }))
    expect(found).toContain('noInterval')
  })
  it('compares a blank with the record for its conditions only', () => {
    const water = findBlankRanges(BLANK_RANGES, { medium: 'water', aeration: null, temperature_K: 298.15, b0_T: 1.5 })
    expect(water).toHaveLength(2)
    const slow = { ti_s: TI_S.map(t => 4 * t), t1_s: 3.55 }
    expect(raised(contextOf(slow, { isBlank: true, blankRanges: water }))).not.toContain('blankOutside')
    expect(raised(contextOf({ ...slow, t1_s: 2.2 }, { isBlank: true, blankRanges: water }))).toContain('blankOutside')
    expect(raised(contextOf({ ...slow, t1_s: 2.2 }, { isBlank: false, blankRanges: water }))).not.toContain('blankOutside')
    expect(findBlankRanges(BLANK_RANGES, { medium: 'plasma', aeration: null, temperature_K: 310, b0_T: 1.5 })).toEqual([])
    expect(findBlankRanges(BLANK_RANGES, { medium: 'plasma', aeration: null, temperature_K: 310, b0_T: 3 })).toHaveLength(1)
    expect(findBlankRanges(BLANK_RANGES, { medium: 'water', aeration: 'degassed', temperature_K: 304, b0_T: 3 })).toEqual([])
  })
  it('names polarity that is not settled, with both T1', () => {
    const ti_s = [0.05, 0.3, 0.62, 1.5, 4]
    const random = createRandom(5)
    const y = ti_s.map(ti => Math.abs(recovery.evaluate(ti, { a_au: 1000, b_au: -1940, t1_s: 0.9 }) + 40 * random.normal())).with(2, 35)
    const { fit, polarity, alternative } = fitRecovery(recovery, { x: ti_s, y }, 'magnitude')
    const context = { ...contextOf(), fit: fit as FitDone, headline: (fit as FitDone).parameters[2]!, x: ti_s, signal_au: polarity!.signal, polarity, alternative: alternative as FitDone }
    const report = reportFlags(INVERSION_FLAGS, context).find(r => r.id === 'polarity')!
    expect(report.state).toBe('raised')
    expect(report.detail).toMatch(/T1 is [\d.]+ s, with the next best signs [\d.]+ s/)
  })
  it('names a lower minimum that an independent program finds', () => {
    const context = contextOf()
    const fit = { ...context.fit, secondOpinion: { agrees: false, sumOfSquares: 1, parameters: [] } }
    expect(raised({ ...context, fit })).toEqual(['secondOpinion'])
  })
})

describe('runs test', () => {
  it('gives the exact distribution: + + + − − − has 2 runs, p = 2/20 [Wald & Wolfowitz, enumeration]', () => {
    expect(runsP([1, 2, 3, -1, -2, -3])).toBeCloseTo(0.1, 14)
    expect(runsP([1, -1, 1, -1, 1, -1])).toBeCloseTo(1, 14)
  })
  it('agrees with counting every arrangement of 4 and 5 signs [enumeration]', () => {
    const all = Array.from({ length: 512 }, (_, k) => Array.from({ length: 9 }, (_, i) => (k >> i) & 1 ? 1 : -1)).filter(s => s.filter(v => v > 0).length === 4)
    const runs = (s: number[]) => 1 + s.slice(1).filter((v, i) => v !== s[i]).length
    for (const s of all.slice(0, 40)) expect(runsP(s)).toBeCloseTo(all.filter(other => runs(other) <= runs(s)).length / all.length, 12)
  })
  it('has no answer where all residuals share a sign', () => {
    expect(runsP([1, 1, 0, 2])).toBeNull()
    expect(runsP([])).toBeNull()
  })
})

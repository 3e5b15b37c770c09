import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { fitLine } from '../../shared/science/least-squares/line'
import { createRandom } from '../../shared/science/random'
import { reportFlags } from '../../shared/science/relaxometry/flags'
import { fitRelaxivity, relaxivityBand, type RelaxivityOptions, type RelaxivityTube } from '../../shared/science/relaxometry/relaxivity'
import { SERIES_FLAGS } from '../../shared/science/relaxometry/seriesFlags'

const CONC_MM = [0, 0.125, 0.25, 0.5, 1, 2]

interface Series { r?: number, dia?: number, relative?: number, pipetting?: number, noise?: number, seed?: string | number }

/** Tubes with relative errors of T and of their own concentration; `noise` scales the scatter against the errors stated. */
function tubesOf({ r = 4.2, dia = 0.35, relative = 0.01, pipetting = 0, noise = 1, seed = 'series' }: Series = {}): RelaxivityTube[] {
  const random = createRandom(seed)
  return CONC_MM.map((conc_mM) => {
    const actual = conc_mM * (1 + noise * pipetting * random.normal())
    const time_s = (1 + noise * relative * random.normal()) / (dia + r * actual)
    return { conc_mM, concSe_mM: pipetting > 0 ? pipetting * conc_mM : null, time_s, timeSe_s: relative * time_s, isBlank: conc_mM === 0 }
  })
}
function done(tubes: readonly RelaxivityTube[], options: RelaxivityOptions = {}) {
  const series = fitRelaxivity(tubes, options)
  if (!series.ok) throw new Error(series.message)
  return series
}
const raised = (tubes: readonly RelaxivityTube[]) => reportFlags(SERIES_FLAGS, done(tubes)).filter(flag => flag.state === 'raised').map(flag => flag.id)

describe('relaxivity', () => {
  it('gives 4.2 per mM and s and 0.35 per s back from exact tubes [R = R_dia + r·c]', () => {
    const series = done(tubesOf({ noise: 0 }))
    expect(series.relaxivity_per_mM_s.value).toBeCloseTo(4.2, 12)
    expect(series.diamagnetic_per_s.value).toBeCloseTo(0.35, 12)
    expect(series.span).toBeCloseTo(8.75 / 0.35, 10)
    expect(series.method).toBe('weighted')
  })
  it('is the line of 1/T weighted by (SE/T²)⁻² [propagation of errors]', () => {
    const tubes = tubesOf()
    const line = fitLine({ x: CONC_MM, y: tubes.map(t => 1 / t.time_s), sigma: tubes.map(t => t.timeSe_s! / t.time_s ** 2) })
    const series = done(tubes)
    expect(line.ok && line.slope).toBe(series.relaxivity_per_mM_s.value)
    expect(line.ok && line.slopeSe).toBe(series.relaxivity_per_mM_s.se)
    expect(series.points[2]!.rateSe_per_s).toBeCloseTo(0.01 * series.points[2]!.rate_per_s, 12)
  })
  it('uses York\'s line where tubes have concentration errors of their own, and tends to the weighted line as they vanish [limit]', () => {
    expect(done(tubesOf({ pipetting: 0.01 })).method).toBe('york')
    const almost = tubesOf().map(tube => ({ ...tube, concSe_mM: 1e-9 * tube.conc_mM }))
    expect(done(almost).relaxivity_per_mM_s.value).toBeCloseTo(done(tubesOf()).relaxivity_per_mM_s.value, 8)
    expect(done(almost).relaxivity_per_mM_s.se).toBeCloseTo(done(tubesOf()).relaxivity_per_mM_s.se!, 8)
  })
  it('adds a common concentration error in quadrature and leaves the value alone [2 % of 4.2 is 0.084]', () => {
    const [plain, scaled] = [done(tubesOf()), done(tubesOf(), { scale_frac: 0.02 })]
    expect(scaled.relaxivity_per_mM_s.value).toBe(plain.relaxivity_per_mM_s.value)
    expect(scaled.scaleSe_per_mM_s).toBeCloseTo(0.02 * plain.relaxivity_per_mM_s.value, 14)
    expect(scaled.relaxivity_per_mM_s.se).toBeCloseTo(Math.hypot(plain.relaxivity_per_mM_s.se!, scaled.scaleSe_per_mM_s!), 14)
    expect(scaled.diamagnetic_per_s).toEqual(plain.diamagnetic_per_s)
  })
  it('scales with the unit of concentration and not with the order of tubes [property]', () => {
    fc.assert(fc.property(fc.double({ min: 0.01, max: 100, noNaN: true }), fc.shuffledSubarray([0, 1, 2, 3, 4, 5], { minLength: 6 }), (factor, order) => {
      const tubes = tubesOf({ pipetting: 0.01 })
      const base = done(tubes)
      const changed = done(order.map(i => ({ ...tubes[i]!, conc_mM: tubes[i]!.conc_mM * factor, concSe_mM: tubes[i]!.concSe_mM! * factor })))
      expect(changed.relaxivity_per_mM_s.value * factor).toBeCloseTo(base.relaxivity_per_mM_s.value, 9)
      expect(changed.relaxivity_per_mM_s.se! * factor).toBeCloseTo(base.relaxivity_per_mM_s.se!, 9)
    }), { seed: 31, numRuns: 50 })
  })
  it('has a band that is the intercept\'s interval at zero and holds the line', () => {
    const series = done(tubesOf())
    const at0 = relaxivityBand(series, 0)
    expect(at0.low_per_s).toBeCloseTo(series.diamagnetic_per_s.interval![0], 12)
    expect(at0.high_per_s).toBeCloseTo(series.diamagnetic_per_s.interval![1], 12)
    expect(relaxivityBand(series, 1).rate_per_s).toBeCloseTo(series.points[4]!.fitted_per_s, 12)
  })
  it('compares the blank with a line that does not contain it [0.2 per s too high is noticed]', () => {
    expect(done(tubesOf()).blank!.p).toBeGreaterThan(0.05)
    const off = done(tubesOf().with(0, { ...tubesOf()[0]!, time_s: 1 / 0.55, timeSe_s: 0.01 }))
    expect(off.blank!.p).toBeLessThan(0.01)
    expect(off.blank!.difference_per_s).toBeCloseTo(-0.2, 1)
    expect(done(tubesOf().slice(1)).blank).toBeNull()
  })
})

describe('refusals and missing numbers', () => {
  it('names the tube and what would be accepted', () => {
    const tubes = tubesOf()
    expect(fitRelaxivity(tubes.with(1, { ...tubes[1]!, time_s: 0 }))).toMatchObject({ ok: false, reason: 'badTime', message: expect.stringContaining('Tube 2') })
    expect(fitRelaxivity(tubes.with(3, { ...tubes[3]!, timeSe_s: NaN }))).toMatchObject({ ok: false, reason: 'badTime' })
    expect(fitRelaxivity(tubes.with(3, { ...tubes[3]!, conc_mM: -1 }))).toMatchObject({ ok: false, reason: 'badConcentration' })
    expect(fitRelaxivity(tubes.slice(0, 1))).toMatchObject({ ok: false, reason: 'tooFewPoints' })
    expect(fitRelaxivity(tubes.map(tube => ({ ...tube, conc_mM: 1 })))).toMatchObject({ ok: false, reason: 'equalConcentrations', message: 'Every tube holds 1 mM.' })
    expect(fitRelaxivity(tubes, { scale_frac: -0.1 })).toMatchObject({ ok: false, reason: 'badScale' })
  })
  it('goes unweighted, and says so, where one error is missing', () => {
    const tubes = tubesOf().with(2, { ...tubesOf()[2]!, timeSe_s: null })
    const series = done(tubes)
    expect(series).toMatchObject({ method: 'unweighted', reducedChi2: null, chi2P: null })
    expect(raised(tubes)).toContain('unweighted')
  })
  it('states no interval through two tubes', () => {
    expect(done(tubesOf().slice(0, 2)).relaxivity_per_mM_s.interval).toBeNull()
    expect(done(tubesOf().slice(0, 2), { scale_frac: 0.02 }).relaxivity_per_mM_s.interval).toBeNull()
  })
})

describe('flags of a series', () => {
  it('passes a good series', () => {
    expect(raised(tubesOf())).toEqual([])
  })
  it('names what is wrong with a bad one', () => {
    const tubes = tubesOf()
    expect(raised(tubes.slice(3))).toEqual(expect.arrayContaining(['fewConcentrations', 'noBlank']))
    expect(raised(tubes.with(3, { ...tubes[3]!, time_s: tubes[3]!.time_s * 1.2 }))).toContain('scatter')
    const [outlier] = reportFlags(SERIES_FLAGS, done(tubes.with(3, { ...tubes[3]!, time_s: tubes[3]!.time_s * 1.2 }))).filter(flag => flag.id === 'outlyingTube')
    expect(outlier).toMatchObject({ state: 'raised', tube: 4 })
    expect(raised(tubes.map(tube => ({ ...tube, time_s: 1 / (1 / tube.time_s - 0.4 * tube.conc_mM ** 2) })))).toContain('bent')
    expect(raised(tubes.with(5, { ...tubes[5]!, time_s: tubes[5]!.time_s * 1.25, timeSe_s: 0.0003 }))).toContain('influence')
    expect(raised(tubes.map(tube => ({ ...tube, conc_mM: tube.conc_mM / 100, time_s: 1 / (0.35 + 0.042 * tube.conc_mM) })))).toContain('smallSpan')
  })
})

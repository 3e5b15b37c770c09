import { describe, expect, it } from 'vitest'
import { omegaPlot, type OmegaForm } from '../../../shared/science/exchange/omegaPlot'
import { fitTransfer, type TransferPoint, type TransferSetup } from '../../../shared/science/exchange/transferFit'
import { omega1_rad_per_s, protonFraction, saturationEfficiency, transferAt, type TransferForm } from '../../../shared/science/exchange/transferForms'
import { createRandom } from '../../../shared/science/random'
import { zOf } from '../../support/zSpectra'

const done = <T extends { ok: boolean }>(outcome: T): Extract<T, { ok: true }> => {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome))
  return outcome as Extract<T, { ok: true }>
}
const B1S = [1.5, 2.5, 4, 6, 8, 11]
const setup = (over: Partial<TransferSetup> = {}): TransferSetup => ({ form: 'steady', r1w_per_s: { value: 0.4, se: null }, r2s_per_s: 50, start: 1, x: null, b1RelativeSe: 0, ...over })
const truth = { k_per_s: 1200, x: 3.6e-4 }
const made = (form: TransferForm, conditions: readonly { b1_uT: number, tsat_s: number }[], se: number | null = null, start = 1): TransferPoint[] =>
  conditions.map(at => ({ ...at, se, value: transferAt(form, { ...truth, ...at }, { r1w_per_s: 0.4, r2s_per_s: 50, start }) }))
const overB1 = B1S.map(b1_uT => ({ b1_uT, tsat_s: 15 }))

describe('forms', () => {
  it('counts protons: 20 mM of two protons is 3.6e-4 of water\'s [n·c/(2·55.5 mol/L)]', () => {
    expect(protonFraction(2, 20)).toBeCloseTo(0.04 / 111, 15)
  })

  it('saturates half the pool where ω1² = k·(k + R2s), and none without B1 [closed form]', () => {
    const b1 = Math.sqrt(1000 * 1050) / omega1_rad_per_s(1)
    expect(saturationEfficiency(1000, { b1_uT: b1, r2s_per_s: 50 })).toBeCloseTo(0.5, 12)
    expect(saturationEfficiency(1000, { b1_uT: 0, r2s_per_s: 50 })).toBe(0)
    expect(saturationEfficiency(-1, { b1_uT: 1, r2s_per_s: 0 })).toBeNaN()
  })

  it('builds up to the steady state, starts at nothing, and starts with the slope x·k·α of a full start', () => {
    const at = (tsat_s: number, start = 1) => transferAt('buildUp', { ...truth, b1_uT: 8, tsat_s }, { r1w_per_s: 0.4, r2s_per_s: 50, start })
    expect(at(200)).toBeCloseTo(transferAt('steady', { ...truth, b1_uT: 8, tsat_s: 1 }, { r1w_per_s: 0.4, r2s_per_s: 50, start: 1 }), 12)
    expect(at(0)).toBe(0)
    const slope = truth.x * truth.k_per_s * saturationEfficiency(truth.k_per_s, { b1_uT: 8, r2s_per_s: 50 })
    expect(at(1e-6) / 1e-6 / slope).toBeCloseTo(1, 5)
    // from nothing, both grow with the same slope R1w at first: no transfer yet
    expect(at(1e-6, 0)).toBeLessThan(1e-6)
  })

  it.each([1, 0.7])('follows the Bloch–McConnell equations within 1 % of the transfer at a pool at 100 ppm, Mz starting at %s [matrix exponential of tests/support]', (start) => {
    const pools = [{ offset_ppm: 0, fraction: 1, k_per_s: 0, rate1_per_s: 0.4, rate2_per_s: 2 }, { offset_ppm: 100, fraction: truth.x, k_per_s: truth.k_per_s, rate1_per_s: 0.4, rate2_per_s: 50 }]
    for (const tsat_s of [0.5, 1, 2, 5, 20]) {
      const [lab, ref] = [100, -100].map(offset => zOf(pools, { b0_T: 7, b1_uT: 8, tsat_s, start }, offset)) as [number, number]
      const form = transferAt('buildUp', { ...truth, b1_uT: 8, tsat_s }, { r1w_per_s: 0.4, r2s_per_s: 50, start })
      expect(Math.abs((1 - lab / ref) / form - 1)).toBeLessThan(0.01)
    }
  })
})

describe('exchange rate from transfer over B1 and saturation time', () => {
  it.each<[string, TransferPoint[], Partial<TransferSetup>]>([
    ['over B1 at steady state', made('steady', overB1), {}],
    ['over B1 at steady state, fraction known', made('steady', overB1), { x: { value: truth.x, se: null } }],
    ['over B1, inverse metric', made('inverse', overB1), { form: 'inverse' }],
    ['over B1 at 1 s', made('buildUp', B1S.map(b1_uT => ({ b1_uT, tsat_s: 1 }))), { form: 'buildUp' }],
    ['over saturation time, fraction known', made('buildUp', [0.5, 1, 2, 4, 8].map(tsat_s => ({ b1_uT: 12, tsat_s }))), { form: 'buildUp', x: { value: truth.x, se: null } }],
    ['over both, incomplete recovery', made('buildUp', B1S.flatMap(b1_uT => [1, 4].map(tsat_s => ({ b1_uT, tsat_s }))), null, 0.6), { form: 'buildUp', start: 0.6 }],
  ])('returns the rate and the fraction it was made with, %s', (_, points, over) => {
    const fit = done(fitTransfer(points, setup(over)))
    expect(fit.k_per_s.value / truth.k_per_s).toBeCloseTo(1, 7)
    expect(fit.x!.value / truth.x).toBeCloseTo(1, 7)
  })

  it('needs no R1w at steady state and then returns x/R1w', () => {
    const fit = done(fitTransfer(made('steady', overB1), setup({ r1w_per_s: null })))
    expect(fit.k_per_s.value / truth.k_per_s).toBeCloseTo(1, 7)
    expect(fit.x).toBeNull()
    expect(fit.xOverR1w_s!.value / (truth.x / 0.4)).toBeCloseTo(1, 7)
  })

  it.each([false, true])('covers the rate in 95 % of 1,000 series with noise 0.004, fraction known: %s', (isKnown) => {
    const random = createRandom('transfer coverage')
    const clean = made('steady', overB1, 0.004)
    let inside = 0
    for (let draw = 0; draw < 1000; draw++) {
      const fit = done(fitTransfer(clean.map(point => ({ ...point, value: point.value + 0.004 * random.normal() })), setup({ x: isKnown ? { value: truth.x, se: null } : null })))
      const [low, high] = fit.k_per_s.interval!
      if (low <= truth.k_per_s && truth.k_per_s <= high) inside++
    }
    // errors that the scatter may only widen cover a little more than 95 %; 1,000 draws know it to 0.7 %
    expect(inside).toBeGreaterThan(930)
    expect(inside).toBeLessThan(990)
  })

  it('carries 5 % of B1 as 5 % of k, R1w and the fraction by their own leverage', () => {
    const points = made('steady', overB1, 0.001)
    const b1 = done(fitTransfer(points, setup({ b1RelativeSe: 0.05, r2s_per_s: 0 })))
    const source = (fit: typeof b1, name: string) => fit.sources.find(one => one.name === name)!.se_per_s
    expect(source(b1, 'b1') / b1.k_per_s.value).toBeCloseTo(0.05, 3)
    expect(b1.k_per_s.se!).toBeCloseTo(Math.hypot(source(b1, 'b1'), source(b1, 'noise')), 6)
    // at steady state R1w only scales the fraction
    const r1w = done(fitTransfer(points, setup({ r1w_per_s: { value: 0.4, se: 0.04 } })))
    expect(source(r1w, 'r1w') / r1w.k_per_s.value).toBeLessThan(1e-6)
    expect(r1w.x!.se! / r1w.x!.value).toBeGreaterThan(0.099)
    const known = done(fitTransfer(points, setup({ x: { value: truth.x, se: 0.1 * truth.x } })))
    expect(source(known, 'x')).toBeGreaterThan(0)
    expect(known.k_per_s.se!).toBeGreaterThan(source(known, 'x'))
  })

  it('names the second rate that one B1 explains as well: k·α is the same for k and ω1²/k', () => {
    const fit = done(fitTransfer(made('buildUp', [0.5, 1, 2, 4, 8].map(tsat_s => ({ b1_uT: 12, tsat_s }))), setup({ form: 'buildUp', r2s_per_s: 50, x: { value: truth.x, se: null } })))
    expect(fit.alternatives_per_s.length).toBe(1)
    expect(fit.alternatives_per_s[0]! / (omega1_rad_per_s(12) ** 2 / truth.k_per_s)).toBeCloseTo(1, 6)
  })

  it('refuses what one B1 cannot tell, readings without transfer, B1 of zero and mixed errors', () => {
    const one = made('buildUp', [1, 2, 4].map(tsat_s => ({ b1_uT: 8, tsat_s })))
    expect(fitTransfer(one, setup({ form: 'buildUp' }))).toMatchObject({ ok: false, reason: 'oneB1' })
    expect(fitTransfer(overB1.map(at => ({ ...at, value: -0.01, se: null })), setup())).toMatchObject({ ok: false, reason: 'noTransfer' })
    expect(fitTransfer([{ b1_uT: 0, tsat_s: 5, value: 0.1, se: null }], setup())).toMatchObject({ ok: false, reason: 'badPoint' })
    expect(fitTransfer(made('steady', overB1).map((point, i) => ({ ...point, se: i === 0 ? 0.1 : null })), setup())).toMatchObject({ ok: false, reason: 'mixedErrors' })
    expect(fitTransfer(made('buildUp', overB1), setup({ form: 'buildUp', r1w_per_s: null }))).toMatchObject({ ok: false, reason: 'noR1w' })
    expect(fitTransfer(made('steady', overB1.slice(0, 2)), setup())).toMatchObject({ ok: false, reason: 'tooFewPoints' })
  })
})

describe('omega plot [Dixon et al. 2010]', () => {
  const ideal = (form: OmegaForm) => made('inverse', overB1).map(({ b1_uT, value }) => ({ b1_uT, se: null, value: form === 'inverse' ? value : 1 / (1 + value) }))

  it.each<OmegaForm>(['plain', 'inverse'])('is exactly straight without direct saturation and crosses at −1/(k·(k + R2s)), %s', (form) => {
    const plot = done(omegaPlot(ideal(form), form, { r2s_per_s: 50, b1RelativeSe: 0 }))
    expect(plot.apparent_per_s.value / Math.sqrt(truth.k_per_s * (truth.k_per_s + 50))).toBeCloseTo(1, 12)
    expect(plot.k_per_s!.value / truth.k_per_s).toBeCloseTo(1, 12)
    plot.points.forEach(point => expect(Math.abs(point.fitted / point.ordinate - 1)).toBeLessThan(1e-12))
    // the crossing itself, in the unit of the axis
    expect((-plot.line.intercept / plot.line.slope) * 1e-6 * truth.k_per_s * (truth.k_per_s + 50)).toBeCloseTo(-1, 11)
  })

  it('says nothing of k where R2s is not known: the apparent rate is about R2s/2 too high', () => {
    const plot = done(omegaPlot(ideal('plain'), 'plain', { r2s_per_s: null, b1RelativeSe: 0 }))
    expect(plot.k_per_s).toBeNull()
    expect(plot.apparent_per_s.value - truth.k_per_s).toBeCloseTo(25, 0)
  })

  it('states the error that 2,000 noisy plots have, and 5 % of B1 as 5 % of k', () => {
    const random = createRandom('omega')
    const clean = ideal('plain').map(point => ({ ...point, se: 0.002 }))
    const found = Array.from({ length: 2000 }, () => done(omegaPlot(clean.map(point => ({ ...point, value: point.value + 0.002 * random.normal() })), 'plain', { r2s_per_s: 0, b1RelativeSe: 0 })).apparent_per_s.value)
    const mean = found.reduce((sum, value) => sum + value, 0) / found.length
    const sd = Math.sqrt(found.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (found.length - 1))
    const plot = done(omegaPlot(clean, 'plain', { r2s_per_s: 0, b1RelativeSe: 0.05 }))
    expect(Math.abs(plot.noiseSe_per_s! / sd - 1)).toBeLessThan(0.06)
    expect(plot.apparent_per_s.se!).toBeCloseTo(Math.hypot(plot.noiseSe_per_s!, 0.05 * plot.apparent_per_s.value), 9)
  })

  it('leaves out points without transfer and says so; refuses two B1, no rise and no crossing', () => {
    const plot = done(omegaPlot([...ideal('plain'), { b1_uT: 0.5, value: 1.01, se: null }], 'plain', { r2s_per_s: 0, b1RelativeSe: 0 }))
    expect(plot.leftOut).toEqual([{ index: 6, reason: expect.stringContaining('no transfer') as string }])
    expect(omegaPlot(ideal('plain').slice(0, 2), 'plain', { r2s_per_s: 0, b1RelativeSe: 0 })).toMatchObject({ ok: false, reason: 'tooFewB1' })
    expect(omegaPlot(B1S.map((b1_uT, i) => ({ b1_uT, value: 0.5 + 0.05 * i, se: null })), 'plain', { r2s_per_s: 0, b1RelativeSe: 0 })).toMatchObject({ ok: false, reason: 'slopeNotPositive' })
    expect(omegaPlot([1, 2, 3].map(b1_uT => ({ b1_uT, value: 1 - 0.02 * b1_uT ** 3, se: null })), 'plain', { r2s_per_s: 0, b1RelativeSe: 0 })).toMatchObject({ ok: false, reason: 'noCrossing' })
  })
})

describe('against the Bloch–McConnell equations [matrix exponential of tests/support]', () => {
  interface Sample { k: number, offset: number, r2w: number, b0: number, conc: number }
  const SAMPLES: Sample[] = [
    { k: 1000, offset: 50, r2w: 5, b0: 7, conc: 20 }, { k: 3000, offset: 55, r2w: 3, b0: 9.4, conc: 10 }, { k: 300, offset: 8, r2w: 2, b0: 9.4, conc: 20 },
    { k: 1000, offset: 15, r2w: 3, b0: 7, conc: 20 }, { k: 1000, offset: 15, r2w: 3, b0: 7, conc: 5 },
  ]
  const measure = ({ k, offset, r2w, b0, conc }: Sample, r1wTsat: number) => {
    const half = Math.sqrt(k * (k + 50)) / omega1_rad_per_s(1)
    const pools = [{ offset_ppm: 0, fraction: 1, k_per_s: 0, rate1_per_s: 0.4, rate2_per_s: r2w }, { offset_ppm: offset, fraction: protonFraction(2, conc), k_per_s: k, rate1_per_s: 1, rate2_per_s: 50 }]
    return [0.4, 0.6, 0.8, 1, 1.3, 1.7, 2.2].map((share) => {
      const saturation = { b0_T: b0, b1_uT: share * half, tsat_s: r1wTsat / 0.4 }
      return { b1_uT: saturation.b1_uT, tsat_s: saturation.tsat_s, se: null, lab: zOf(pools, saturation, offset), ref: zOf(pools, saturation, -offset) }
    })
  }

  it.each(SAMPLES)('finds k within 5 % by QUESP, both forms, and by the omega plot at R1w·tsat of 5, α from 0.14 to 0.83, direct saturation below 5 %: k $k at $offset ppm, $conc mM', (sample) => {
    const readings = measure(sample, 5)
    expect(1 - Math.min(...readings.map(one => one.ref))).toBeLessThan(0.05)
    const close = (value: number) => expect(Math.abs(value / sample.k - 1)).toBeLessThan(0.05)
    close(done(fitTransfer(readings.map(one => ({ ...one, value: 1 - one.lab / one.ref })), setup())).k_per_s.value)
    const rex = readings.map(one => ({ ...one, value: 1 / one.lab - 1 / one.ref }))
    const inverse = done(fitTransfer(rex, setup({ form: 'inverse' }))).k_per_s.value
    expect(Math.abs(inverse / sample.k - 1)).toBeLessThan(0.01)
    const omega = done(omegaPlot(rex, 'inverse', { r2s_per_s: 50, b1RelativeSe: 0 }))
    close(omega.k_per_s!.value)
    expect(Math.abs(omega.apparent_per_s.value / Math.sqrt(sample.k * (sample.k + 50)) - 1)).toBeLessThan(0.01)
  })

  it('finds k within 5 % by QUEST, saturation times at three B1 and the fraction known, where the slowest is at R1w·tsat of 5', () => {
    const [sample] = SAMPLES as [Sample]
    const points = [0.5, 1, 2, 5].flatMap(r1wTsat => measure(sample, r1wTsat).filter((_, i) => i % 3 === 0).map(one => ({ ...one, value: 1 - one.lab / one.ref })))
    const fit = done(fitTransfer(points, setup({ form: 'buildUp', x: { value: protonFraction(2, sample.conc), se: null } })))
    expect(Math.abs(fit.k_per_s.value / sample.k - 1)).toBeLessThan(0.05)
  })

  it('inverse QUESP is too high before the steady state, by about 18, 1 and 0 % at R1w·tsat of 1, 3 and 5 for a fast pool', () => {
    const sample = { k: 3000, offset: 50, r2w: 5, b0: 7, conc: 20 }
    const bias = [1, 3, 5].map(rt => 100 * (done(fitTransfer(measure(sample, rt).map(one => ({ ...one, value: 1 / one.lab - 1 / one.ref })), setup({ form: 'inverse' }))).k_per_s.value / sample.k - 1))
    expect(bias[0]).toBeGreaterThan(10)
    expect(bias[0]).toBeLessThan(25)
    expect(bias[1]).toBeGreaterThan(0.3)
    expect(bias[1]).toBeLessThan(3)
    expect(Math.abs(bias[2]!)).toBeLessThan(0.5)
  })

  it('plain omega is biased the more the more dilute the pool: the inverse one is not', () => {
    const at = (conc: number, form: OmegaForm) => {
      const readings = measure({ k: 1000, offset: 15, r2w: 3, b0: 7, conc }, 8)
      return done(omegaPlot(readings.map(one => ({ ...one, value: form === 'plain' ? one.lab : 1 / one.lab - 1 / one.ref })), form, { r2s_per_s: 50, b1RelativeSe: 0 })).k_per_s!.value / 1000 - 1
    }
    expect(at(5, 'plain')).toBeGreaterThan(3 * at(30, 'plain'))
    expect(Math.abs(at(5, 'inverse'))).toBeLessThan(0.005)
  })
})

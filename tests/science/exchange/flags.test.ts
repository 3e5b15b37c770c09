import { describe, expect, it } from 'vitest'
import { normaliseSpectrum, type RawSpectrum } from '../../../shared/science/exchange/normalise'
import { omegaPlot } from '../../../shared/science/exchange/omegaPlot'
import { conditionFlags, disagreements, omegaFlags, transferFlags, type RateConditions } from '../../../shared/science/exchange/rateFlags'
import { spectrumFlags, suspectOffsetUnit, type ExpectedPool } from '../../../shared/science/exchange/spectrumFlags'
import { fitTransfer } from '../../../shared/science/exchange/transferFit'
import { omega1_rad_per_s, protonFraction, transferAt } from '../../../shared/science/exchange/transferForms'
import { noShift, type WaterShift } from '../../../shared/science/exchange/waterShift'
import { range, zOf } from '../../support/zSpectra'

const done = <T extends { ok: boolean }>(outcome: T): Extract<T, { ok: true }> => {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome))
  return outcome as Extract<T, { ok: true }>
}
const POOL: ExpectedPool = { offset_ppm: 50, width_ppm: 4 }
const zAt = (at: number) => 1 - 0.95 / (1 + (at / 1.5) ** 2) - 0.2 / (1 + ((at - 50) / 2) ** 2)
const GOOD = range(-80, 80, 1)
const shift: WaterShift = { ok: true, method: 'wassr', shift_ppm: 0, se_ppm: 0.01, points: 40, asymmetry: 1 }
const raw = (offset_ppm: readonly number[], over: Partial<RawSpectrum> = {}): RawSpectrum => ({
  offset_ppm, signal_au: offset_ppm.map(at => 1000 * zAt(at)), order: offset_ppm.map((_, i) => i + 10), sd_au: null,
  s0: [{ signal_au: 1001, order: 0 }, { signal_au: 999, order: 1 }, { signal_au: 1001, order: 1e6 }, { signal_au: 999, order: 1e6 + 1 }], ...over,
})
const idsOf = (input: RawSpectrum, pool = POOL, water: WaterShift = shift) => spectrumFlags(done(normaliseSpectrum(input)), water, pool).map(one => one.id)

describe('flags of a spectrum', () => {
  it('none for a spectrum on both sides, fine, with a plateau, S0 repeats and a water shift', () => {
    expect(idsOf(raw(GOOD))).toEqual([])
  })

  it.each<[string, string, RawSpectrum, ExpectedPool, WaterShift]>([
    ['one side only', 'oneSided', raw(range(0, 80, 1)), POOL, shift],
    ['the opposite side too short', 'mirrorOutside', raw(range(-40, 80, 1)), POOL, shift],
    ['the pool outside the range', 'poolOutside', raw(range(-30, 30, 1)), POOL, shift],
    ['offsets too far apart', 'coarseSpacing', raw(range(-80, 80, 2)), POOL, shift],
    ['S0 that drifts', 's0Drift', raw(GOOD, { s0: [{ signal_au: 1000, order: 0 }, { signal_au: 970, order: 1e6 }] }), POOL, shift],
    ['S0 measured once', 'noNoise', raw(GOOD, { s0: [{ signal_au: 1000, order: 0 }] }), POOL, shift],
    ['an offset twice', 'repeatedOffsets', raw([...GOOD, 50]), POOL, shift],
    ['Z above 1.03', 'zAboveOne', raw(GOOD, { signal_au: GOOD.map((at, i) => i === 7 ? 1050 : 1000 * zAt(at)) }), POOL, shift],
    ['saturation everywhere', 'saturatedEverywhere', raw(GOOD, { signal_au: GOOD.map(() => 12) }), POOL, shift],
    ['ends that still move', 'noPlateau', raw(range(-4, 4, 0.1)), { offset_ppm: 3, width_ppm: 1 }, shift],
    ['ends far from 1', 'noPlateau', raw(GOOD, { signal_au: GOOD.map(at => 800 * zAt(at)) }), POOL, shift],
    ['an uncertain shift', 'shiftError', raw(GOOD), POOL, { ...shift, se_ppm: 0.3 }],
    ['a dip that is not symmetric', 'waterAsymmetric', raw(GOOD), POOL, { ...shift, asymmetry: 5 }],
    ['a shift that leaves the data', 'shiftLeavesData', raw(range(-53, 53, 1)), POOL, { ...shift, shift_ppm: 2 }],
    ['no shift', 'noShift', raw(GOOD), POOL, noShift],
  ])('%s: %s, and says what to do', (_, id, input, pool, water) => {
    const found = spectrumFlags(done(normaliseSpectrum(input)), water, pool).find(one => one.id === id)
    expect(found?.sentence).toMatch(/\. [A-Z].*\.$/)
  })

  it('asks about offsets in the wrong unit, and not about those that may be right', () => {
    expect(suspectOffsetUnit(range(-24000, 24000, 300), 'ppm', 300)?.likely).toBe('Hz')
    expect(suspectOffsetUnit(range(-80, 80, 1), 'Hz', 300)?.likely).toBe('ppm')
    expect(suspectOffsetUnit(range(-80, 80, 1), 'ppm', 300)).toBeNull()
    expect(suspectOffsetUnit(range(-24000, 24000, 300), 'Hz', 300)).toBeNull()
    expect(suspectOffsetUnit(range(-300, 300, 10), 'Hz', 300)).toBeNull()
  })
})

describe('flags of a rate', () => {
  const good: RateConditions = { b1s_uT: [1, 2, 4, 8, 12], tsat_s: [15], r1w_per_s: 0.4, r2s_per_s: 50, opposite: [1, 0.999, 0.998, 0.99, 0.98] }
  const needs = { steady: true, overB1: true }

  it('none where R1w·tsat is 5 or more, B1 brackets half saturation and direct saturation is below 5 %', () => {
    expect(conditionFlags(1200, good, needs)).toEqual([])
  })

  it.each<[string, string, number, Partial<RateConditions>]>([
    ['too short a saturation', 'notSteady', 1200, { tsat_s: [15, 4] }],
    ['R1w not known', 'steadyUnknown', 1200, { r1w_per_s: null }],
    ['weak B1 only', 'alphaNotBracketed', 20_000, {}],
    ['strong B1 only', 'alphaNotBracketed', 100, {}],
    ['direct saturation', 'directSaturation', 1200, { opposite: [1, 0.94] }],
    ['R2 of the pool not known', 'r2sNeglected', 1200, { r2s_per_s: null }],
  ])('%s: %s', (_, id, k, over) => {
    expect(conditionFlags(k, { ...good, ...over }, needs).map(one => one.id)).toContain(id)
  })

  it('names two rates, the turn, and protons that do not add up', () => {
    const settings = { r1w_per_s: 0.4, r2s_per_s: 50, start: 1 }
    const one = { form: 'buildUp' as const, r1w_per_s: { value: 0.4, se: null }, r2s_per_s: 50, start: 1, b1RelativeSe: 0 }
    const quest = (b1_uT: number) => [1, 2, 4, 8].map(tsat_s => ({ b1_uT, tsat_s, se: 0.001, value: transferAt('buildUp', { k_per_s: 1200, x: 4e-4, b1_uT, tsat_s }, settings) }))
    const near = done(fitTransfer(quest(5), { ...one, x: { value: 4e-4, se: null } }))
    expect(transferFlags(near, { ...good, b1s_uT: [5] }, { x: null }).map(flag => flag.id)).toEqual(['twoRates', 'nearTurn'])
    const over = [1, 2, 4, 8, 12].map(b1_uT => ({ b1_uT, tsat_s: 15, se: 0.0005, value: transferAt('steady', { k_per_s: 1200, x: 4e-4, b1_uT, tsat_s: 15 }, settings) }))
    const fit = done(fitTransfer(over, { ...one, form: 'steady', x: null }))
    expect(transferFlags(fit, good, { x: { value: 2e-4, se: 1e-5 } }).map(flag => flag.id)).toEqual(['protonsDisagree'])
    expect(transferFlags(fit, good, { x: { value: 4e-4, se: 1e-5 } })).toEqual([])
  })

  it('fires for every simulated case outside the limits in which k is more than 5 % off, and for none inside [Bloch–McConnell of tests/support]', () => {
    const seen = { inside: 0, off: 0 }
    for (const { k, offset, b0, r2w, conc } of [{ k: 1000, offset: 50, b0: 7, r2w: 5, conc: 20 }, { k: 3000, offset: 50, b0: 7, r2w: 10, conc: 5 }, { k: 300, offset: 5, b0: 7, r2w: 2, conc: 20 }, { k: 1000, offset: 15, b0: 7, r2w: 3, conc: 5 }]) {
      for (const rt of [1, 3, 5]) {
        const half = Math.sqrt(k * (k + 50)) / omega1_rad_per_s(1)
        const pools = [{ offset_ppm: 0, fraction: 1, k_per_s: 0, rate1_per_s: 0.4, rate2_per_s: r2w }, { offset_ppm: offset, fraction: protonFraction(2, conc), k_per_s: k, rate1_per_s: 1, rate2_per_s: 50 }]
        const readings = [0.4, 0.6, 0.8, 1, 1.3, 1.7, 2.2].map((share) => {
          const at = { b0_T: b0, b1_uT: share * half, tsat_s: rt / 0.4 }
          return { b1_uT: at.b1_uT, lab: zOf(pools, at, offset), ref: zOf(pools, at, -offset) }
        })
        const conditions: RateConditions = { b1s_uT: readings.map(one => one.b1_uT), tsat_s: [rt / 0.4], r1w_per_s: 0.4, r2s_per_s: 50, opposite: readings.map(one => one.ref) }
        const steady = done(fitTransfer(readings.map(one => ({ b1_uT: one.b1_uT, tsat_s: rt / 0.4, se: null, value: 1 - one.lab / one.ref })), { form: 'steady', r1w_per_s: { value: 0.4, se: null }, r2s_per_s: 50, start: 1, x: null, b1RelativeSe: 0 }))
        const plain = done(omegaPlot(readings.map(one => ({ b1_uT: one.b1_uT, value: one.lab, se: null })), 'plain', { r2s_per_s: 50, b1RelativeSe: 0 }))
        const cases = [
          { error: steady.k_per_s.value / k - 1, flags: transferFlags(steady, conditions, { x: null }) },
          { error: plain.k_per_s!.value / k - 1, flags: omegaFlags(plain, conditions, { mtrRex: readings.map(one => 1 / one.lab - 1 / one.ref) }) },
        ]
        for (const { error, flags } of cases) {
          if (Math.abs(error) > 0.05) {
            seen.off++
            expect(flags.map(one => one.id)).not.toEqual([])
          } else if (flags.length === 0) seen.inside++
        }
      }
    }
    // the loop above must have met both kinds
    expect(seen.off).toBeGreaterThan(5)
    expect(seen.inside).toBeGreaterThan(1)
  })

  it('points at methods that differ beyond their errors, and not at those that do not', () => {
    const rate = (method: string, value: number, se: number | null) => ({ method, k_per_s: { value, se } })
    const found = disagreements([rate('QUESP', 1000, 20), rate('omega plot', 1200, 30), rate('QUEST', 1010, 10), rate('none', 3000, null)])
    expect(found.map(one => one.pair)).toEqual([['QUESP', 'omega plot'], ['omega plot', 'QUEST']])
    expect(found[0]!.sentence).toContain('18 %')
  })
})

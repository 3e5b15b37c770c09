import { describe, expect, it } from 'vitest'
import reference from '../../../fixtures/reference/exchange/lorentzian.json'
import { compareCounts } from '../../../shared/science/exchange/lorentzianCounts'
import { fitLorentzians, type LorentzianFit, type PoolStart } from '../../../shared/science/exchange/lorentzianFit'
import { lorentzianAt, lorentzianProblem, projectedLorentzian } from '../../../shared/science/exchange/lorentzianModel'
import { normalInformation } from '../../../shared/science/exchange/normalInformation'
import { informationOf } from '../../../shared/science/least-squares/covariance'
import { createRandom } from '../../../shared/science/random'
import { noisy, range } from '../../support/zSpectra'

const done = <T extends { ok: boolean }>(outcome: T): Extract<T, { ok: true }> => {
  if (!outcome.ok) throw new Error(JSON.stringify(outcome))
  return outcome as Extract<T, { ok: true }>
}
const poolsOf = ({ start, lower, upper, baseline }: { start: number[], lower: number[], upper: number[], baseline: boolean }): PoolStart[] => {
  const first = baseline ? 1 : 0
  return Array.from({ length: (start.length - first) / 3 }, (_, c) => {
    const at = first + 3 * c
    const between = (j: number) => [lower[j]!, upper[j]!] as const
    return { name: `pool ${c + 1}`, offset_ppm: start[at + 2]!, width_ppm: start[at + 1]!, depthRange: between(at), widthRange_ppm: between(at + 1), offsetRange_ppm: between(at + 2) }
  })
}
const valuesOf = (fit: LorentzianFit) => [...(fit.baseline ? [fit.baseline] : []), ...fit.pools.flatMap(one => [one.depth, one.width_ppm, one.offset_ppm])]

const AXIS = range(-8, 8, 0.16)
const TRUTH = [{ depth: 0.85, width_ppm: 1.4, offset_ppm: 0.02 }, { depth: 0.09, width_ppm: 1, offset_ppm: 3.5 }, { depth: 0.07, width_ppm: 2.2, offset_ppm: -3.4 }]
const spectrumOf = (pools: typeof TRUTH) => AXIS.map(at => 1 - pools.reduce((sum, one) => sum + lorentzianAt(at, one), 0))
const wide = (name: string, pool: (typeof TRUTH)[number]): PoolStart => ({
  name, offset_ppm: pool.offset_ppm + 0.1, width_ppm: 1.3 * pool.width_ppm, offsetRange_ppm: [pool.offset_ppm - 1, pool.offset_ppm + 1], widthRange_ppm: [0.2, 10], depthRange: [0, 1],
})
const [water, amide, upfield] = [wide('water', TRUTH[0]!), wide('amide', TRUTH[1]!), wide('upfield', TRUTH[2]!)]

describe('Lorentzian pools', () => {
  it.each(reference.cases.map((one, i) => [i + 1, one] as const))('gives the values of scipy to a thousandth of their errors, and its errors to 5e-4, spectrum %i [fixtures/reference/exchange/lorentzian.py]', (_, one) => {
    const fit = done(fitLorentzians({ offset_ppm: one.x, z: one.z, zSe: one.sigma }, poolsOf(one), { baseline: one.baseline ? 'fitted' : 'one' }))
    const chi2 = one.sigma ? fit.reducedChi2! * fit.dof : fit.rss
    expect(chi2 / one.chi2).toBeLessThan(1 + 1e-9)
    // errors given are widened where the scatter exceeds them; scipy's are not
    const widened = one.sigma ? Math.sqrt(Math.max(1, fit.reducedChi2!)) : 1
    valuesOf(fit).forEach((parameter, j) => {
      expect(parameter.atBound).toBe(false)
      expect(Math.abs(parameter.value - one.value[j]!) / one.se[j]!).toBeLessThan(1e-3)
      expect(parameter.se! / (one.se[j]! * widened)).toBeCloseTo(1, 3)
    })
  })

  it('returns the pools of a spectrum without noise', () => {
    const fit = done(fitLorentzians({ offset_ppm: AXIS, z: spectrumOf(TRUTH), zSe: null }, [water, amide, upfield], { baseline: 'fitted' }))
    fit.pools.forEach((pool, c) => {
      expect(pool.depth.value).toBeCloseTo(TRUTH[c]!.depth, 9)
      expect(pool.width_ppm.value).toBeCloseTo(TRUTH[c]!.width_ppm, 8)
      expect(pool.offset_ppm.value).toBeCloseTo(TRUTH[c]!.offset_ppm, 9)
    })
    expect(fit.baseline!.value).toBeCloseTo(1, 9)
    expect(fit.conditionWarning).toBeNull()
  })

  it('has the gradient of its own values, whole and projected [central differences]', () => {
    const data = { offset_ppm: AXIS, z: noisy(spectrumOf(TRUTH), 0.01, createRandom('gradient')), weights: AXIS.map((_, i) => 1 + (i % 3)) }
    const whole = lorentzianProblem(data, true, { lower: new Float64Array(7), upper: new Float64Array(7) })
    const p = Float64Array.of(0.98, 0.8, 1.3, 0.1, 0.1, 1.2, 3.3)
    const [residual, jacobian, up, down, waste] = [whole.n, 7 * whole.n, whole.n, whole.n, 7 * whole.n].map(size => new Float64Array(size)) as [Float64Array, Float64Array, Float64Array, Float64Array, Float64Array]
    whole.evaluate(p, residual, jacobian)
    for (let j = 0; j < 7; j++) {
      const [more, less] = [p.slice(), p.slice()]
      more[j]! += 1e-6
      less[j]! -= 1e-6
      whole.evaluate(more, up, waste)
      whole.evaluate(less, down, waste)
      for (let i = 0; i < whole.n; i++) expect(jacobian[j * whole.n + i]).toBeCloseTo((up[i]! - down[i]!) / 2e-6, 7)
    }
    // at given widths and places the projected residual is that of the whole problem with the depths that belong to them
    const projected = projectedLorentzian(data, true, { lower: new Float64Array(4), upper: new Float64Array(4) })
    const nonlinear = Float64Array.of(1.3, 0.1, 1.2, 3.3)
    const [base, first, second] = projected.linearAt(nonlinear)
    projected.problem.evaluate(nonlinear, up, waste)
    whole.evaluate(Float64Array.of(base!, first!, 1.3, 0.1, second!, 1.2, 3.3), down, jacobian)
    for (let i = 0; i < whole.n; i++) expect(up[i]).toBeCloseTo(down[i]!, 12)
    // and no change of depths or baseline lowers it
    for (const j of [0, 1, 4]) {
      let product = 0
      for (let i = 0; i < whole.n; i++) product += jacobian[j * whole.n + i]! * down[i]!
      expect(Math.abs(product)).toBeLessThan(1e-10)
    }
  })

  it('covers depths, widths and places in 95 % of 600 noisy spectra', () => {
    const random = createRandom('lorentzian coverage')
    const clean = spectrumOf(TRUTH)
    const inside = [0, 0, 0]
    for (let draw = 0; draw < 600; draw++) {
      const pool = done(fitLorentzians({ offset_ppm: AXIS, z: noisy(clean, 0.003, random), zSe: null }, [water, amide, upfield], { baseline: 'one' })).pools[1]!
      const holds = ({ interval }: { interval: readonly [number, number] | null }, value: number) => interval![0] <= value && value <= interval![1]
      if (holds(pool.depth, TRUTH[1]!.depth)) inside[0]!++
      if (holds(pool.width_ppm, TRUTH[1]!.width_ppm)) inside[1]!++
      if (holds(pool.offset_ppm, TRUTH[1]!.offset_ppm)) inside[2]!++
    }
    // 600 draws know a coverage of 95 % to 0.9 %
    inside.forEach(count => expect(Math.abs(count / 600 - 0.95)).toBeLessThan(0.03))
  })

  it('holds a pool that is not there at depth 0, without an error, and still states the errors of the others', () => {
    const z = noisy(spectrumOf(TRUTH.slice(0, 1)), 0.002, createRandom('absent')).map((value, i) => value + 0.02 / (1 + (AXIS[i]! - 3.5) ** 2))
    const fit = done(fitLorentzians({ offset_ppm: AXIS, z, zSe: null }, [water, amide], { baseline: 'one' }))
    expect(fit.pools[1]!.depth).toMatchObject({ value: 0, se: null, atBound: true, interval: null })
    expect(fit.pools[1]!.width_ppm.se).toBeNull()
    expect(fit.pools[0]!.depth.se!).toBeGreaterThan(0)
  })

  it('warns where two pools overlap so far that the data hardly tell them apart', () => {
    const z = noisy(spectrumOf([TRUTH[0]!, { depth: 0.05, width_ppm: 1, offset_ppm: 3.4 }, { depth: 0.05, width_ppm: 1.3, offset_ppm: 3.7 }]), 1e-4, createRandom('overlap'))
    const fit = done(fitLorentzians({ offset_ppm: AXIS, z, zSe: null }, [water, { ...amide, offset_ppm: 3.4 }, { ...amide, name: 'second amide', offset_ppm: 3.7 }], { baseline: 'one' }))
    expect(fit.conditionWarning).toMatch(/amide.*second amide/)
  })

  it.each(['a', 'b', 'c', 'd'])('does not lose the water where a pool too many makes the projection cancel itself, noise %s', (seed) => {
    const z = noisy(spectrumOf(TRUTH.slice(0, 2)), 0.003, createRandom(seed))
    const two = done(fitLorentzians({ offset_ppm: AXIS, z, zSe: null }, [water, amide], { baseline: 'one' }))
    const three = done(fitLorentzians({ offset_ppm: AXIS, z, zSe: null }, [water, amide, { ...amide, name: 'second amide', offset_ppm: 3.7 }], { baseline: 'one' }))
    // a model that holds the other is never worse
    expect(three.rss).toBeLessThanOrEqual(two.rss * (1 + 1e-9))
    expect(three.pools[0]!.depth.value).toBeCloseTo(0.85, 1)
  })

  it('prefers three pools by AICc where there are three, and finds the third by itself', () => {
    const z = noisy(spectrumOf(TRUTH), 0.003, createRandom('counts'))
    const { fits, preferred } = compareCounts({ offset_ppm: AXIS, z, zSe: null }, [water, amide], [2, 5], { baseline: 'one' })
    expect(preferred).toBe(3)
    const third = fits.find(one => one.count === 3)!
    expect(third.deltaAicc).toBeLessThan(fits.find(one => one.count === 2)!.deltaAicc!)
    expect(done(third.outcome as LorentzianFit).pools[2]!.offset_ppm.value).toBeCloseTo(TRUTH[2]!.offset_ppm, 1)
  })

  it('refuses a pool outside the spectrum, empty bounds, too few points and no pool', () => {
    const spectrum = { offset_ppm: AXIS, z: spectrumOf(TRUTH), zSe: null }
    const reason = (pools: PoolStart[], data = spectrum) => fitLorentzians(data, pools, { baseline: 'one' })
    expect(reason([water, { ...amide, offset_ppm: 12 }])).toMatchObject({ ok: false, reason: 'poolOutside' })
    expect(reason([{ ...water, widthRange_ppm: [2, 2] }])).toMatchObject({ ok: false, reason: 'badBounds' })
    expect(reason([water, amide], { offset_ppm: AXIS.slice(0, 6), z: spectrum.z.slice(0, 6), zSe: null })).toMatchObject({ ok: false, reason: 'tooFewPoints' })
    expect(reason([])).toMatchObject({ ok: false, reason: 'badCount' })
    expect(reason([water], { ...spectrum, z: spectrum.z.map((value, i) => i === 3 ? NaN : value) })).toMatchObject({ ok: false, reason: 'notFinite' })
  })
})

describe('inverse information by normal equations', () => {
  it('is that of the QR to nine digits, its condition number within 1 %, held columns left out', () => {
    const random = createRandom('information')
    const n = 60
    for (const m of [2, 5, 16]) {
      const jacobian = new Float64Array(n * m).map((_, i) => random.normal() * 10 ** (Math.floor(i / n) % 5 - 2) + (i % n) * 0.01)
      const held = Array.from({ length: m }, (_, j) => j === 1 && m > 2)
      const [quick, exact] = [normalInformation(jacobian, n, held), informationOf(jacobian, n, held)]
      exact.inverse!.forEach((entry, i) => expect(Math.abs(quick.inverse![i]! - entry)).toBeLessThanOrEqual(1e-9 * Math.sqrt(exact.inverse![Math.floor(i / m) * (m + 1)]! * exact.inverse![(i % m) * (m + 1)]!)))
      expect(Math.abs(quick.condition! / exact.condition! - 1)).toBeLessThan(0.01)
    }
  })

  it('hands what is ill-conditioned to the QR', () => {
    const column = Float64Array.from({ length: 20 }, (_, i) => 1 + i)
    const near = Float64Array.of(...column, ...column.map((value, i) => value + 1e-4 * Math.sin(i)))
    expect(normalInformation(near, 20, [false, false])).toEqual(informationOf(near, 20, [false, false]))
    expect(normalInformation(Float64Array.of(...column, ...column), 20, [false, false]).inverse).toBeNull()
  })
})

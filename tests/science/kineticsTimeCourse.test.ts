import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { fitActivation } from '#shared/science/kinetics/temperatureFit'
import { correctDecay, fitTimeCourse, type TimeCourse, type TimePoint } from '#shared/science/kinetics/timeCourse'
import { eyringRate_per_s } from '#shared/science/kinetics/eyring'
import { createRandom } from '#shared/science/random'

interface Course { t: number[], y: number[], end: number, start: number, rate: number, relativeSe: number }
const reference = JSON.parse(readFileSync(new URL('../../fixtures/reference/kinetics/fits.json', import.meta.url), 'utf8')) as {
  courses: Course[], eyring: { T: number[], k: number[], dH_kJ: number, dHse_kJ: number, dS: number, dSse: number }
}
const free = { end: null, start: null }
const points = (t: readonly number[], y: readonly number[], sigma: number | null = null): TimePoint[] => t.map((time_s, i) => ({ time_s, signal: y[i]!, sigma }))
const fitted = (p: readonly TimePoint[], options: Parameters<typeof fitTimeCourse>[1] = free): TimeCourse => {
  const fit = fitTimeCourse(p, options)
  if (!fit.ok) throw new Error(fit.message)
  return fit
}
const noisy = (seed: string, count: number, sd: number, curve: (t: number) => number): TimePoint[] => {
  const random = createRandom(seed)
  return Array.from({ length: count }, (_, i) => ({ time_s: i * 100, signal: curve(i * 100) + sd * random.normal(), sigma: null }))
}

describe('first-order time courses', () => {
  it('finds rate, ends and relative error of independent fits to six digits [scipy curve_fit, fixtures/reference/kinetics/fits.py]', () => {
    for (const course of reference.courses) {
      const fit = fitted(points(course.t, course.y))
      expect(fit.rate_per_s.value / course.rate).toBeCloseTo(1, 6)
      expect(fit.start).toBeCloseTo(course.start, 5)
      expect(fit.end).toBeCloseTo(course.end, 5)
      expect(fit.rate_per_s.se! / fit.rate_per_s.value / course.relativeSe).toBeCloseTo(1, 4)
    }
  })

  it('turns the interval of ln k over into that of the half-life', () => {
    const fit = fitted(points(reference.courses[0]!.t, reference.courses[0]!.y))
    expect(fit.halfLife_s.interval![0]).toBeCloseTo(Math.LN2 / fit.rate_per_s.interval![1], 6)
    expect(fit.halfLife_s.interval![0] * fit.halfLife_s.interval![1] / fit.halfLife_s.value ** 2).toBeCloseTo(1, 9)
  })

  it('refuses a course that stays level, and one that moves away from its known end', () => {
    expect(fitTimeCourse(noisy('level', 20, 0.02, () => 1), free)).toMatchObject({ ok: false, reason: 'doesNotDecay' })
    expect(fitTimeCourse(noisy('away', 20, 0.01, t => 1 + t / 1000), { end: 0, start: null })).toMatchObject({ ok: false, reason: 'doesNotDecay' })
  })

  it('takes the initial rate, flagged, where less than a tenth has reacted between stated ends, a few per cent low', () => {
    const fit = fitted(noisy('initial', 20, 1e-5, t => Math.exp(-4e-5 * t)), { start: 1, end: 0 })
    expect(fit.form).toBe('initialRate')
    expect(fit.flags).toContain('initialRate')
    expect(fit.rate_per_s.value / 4e-5).toBeGreaterThan(0.94)
    expect(fit.rate_per_s.value / 4e-5).toBeLessThan(1)
  })

  it('sees a second exponential that is there and not one that is not', () => {
    const two = fitted(noisy('two', 40, 0.002, t => 0.5 * Math.exp(-3e-3 * t) + 0.5 * Math.exp(-3e-4 * t)), { end: 0, start: null })
    expect(two.flags).toEqual(expect.arrayContaining(['runs', 'secondExponential']))
    expect(fitted(noisy('one', 40, 0.002, t => Math.exp(-1e-3 * t)), { end: 0, start: null }).flags).toEqual([])
  })

  it('refers counts of a decaying nuclide to one instant before the rate is read', () => {
    const raw = noisy('hot', 30, 0, t => Math.exp(-5e-4 * t) * 2 ** (-t / 4000))
    const corrected = correctDecay(raw, 4000, 0)
    if (!Array.isArray(corrected)) throw new Error('refused')
    expect(fitted(corrected as TimePoint[], { end: 0, start: null }).rate_per_s.value).toBeCloseTo(5e-4, 10)
    expect(correctDecay(raw, 0, 0)).toMatchObject({ ok: false, reason: 'badHalfLife' })
  })

  it('says where a point is unusable, and that three times are too few', () => {
    expect(fitTimeCourse(points([0, 1, 2, 3, NaN], [1, 1, 1, 1, 1]), free)).toMatchObject({ ok: false, message: expect.stringContaining('Point 5') as string })
    expect(fitTimeCourse(points([0, 1, 2], [1, 0.5, 0.2]), free)).toMatchObject({ ok: false, reason: 'tooFewPoints' })
  })

  it('holds the true rate in its interval in 95 % of seeded courses, within three binomial errors', () => {
    const runs = process.env.LANTHORN_TEST === 'full' ? 2000 : 300
    let inside = 0
    for (let i = 0; i < runs; i++) {
      const [low, high] = fitted(noisy(`cover-${i}`, 15, 0.02, t => 0.2 + 0.8 * Math.exp(-1.5e-3 * t))).rate_per_s.interval!
      if (low <= 1.5e-3 && high >= 1.5e-3) inside++
    }
    expect(Math.abs(inside / runs - 0.95)).toBeLessThan(3 * Math.sqrt(0.95 * 0.05 / runs))
  }, 120_000)
})

describe('rates against temperature', () => {
  const { T, k, ...scipy } = reference.eyring
  const at = (T_: readonly number[]) => T_.map((temperature_K, i) => ({ temperature_K, rate_per_s: k[i]!, se_per_s: null }))

  it('finds enthalpy, entropy and their errors of an independent line [numpy polyfit, fixtures/reference/kinetics/fits.py]', () => {
    const fit = fitActivation(at(T), 'eyring')
    if (!fit.ok) throw new Error(fit.message)
    expect(fit.energy_kJ_per_mol).toBeCloseTo(scipy.dH_kJ, 6)
    expect(fit.energySe_kJ_per_mol).toBeCloseTo(scipy.dHse_kJ, 6)
    expect(fit.second).toBeCloseTo(scipy.dS, 5)
    expect(fit.secondSe).toBeCloseTo(scipy.dSse, 5)
    expect(fit.at(310.15).rate_per_s.value / eyringRate_per_s(310.15, fit.energy_kJ_per_mol, fit.second)).toBeCloseTo(1, 9)
    expect(fit.at(340).outside_K).toBeCloseTo(21.85, 9)
    expect(fit.at(298.15).rate_per_s.se! / fit.at(298.15).rate_per_s.value).toBeLessThan(fit.at(340).rate_per_s.se! / fit.at(340).rate_per_s.value)
  })

  it('asks whether temperatures of 5 to 45 are in °C, and refuses two of them', () => {
    expect(fitActivation(at(T.map(v => v - 273.15)), 'arrhenius')).toMatchObject({ ok: false, reason: 'celsiusAsKelvin' })
    expect(fitActivation(at(T).slice(0, 2), 'eyring')).toMatchObject({ ok: false, reason: 'tooFewPoints' })
  })
})

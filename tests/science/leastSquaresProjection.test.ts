import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { bootstrapFit } from '../../shared/science/least-squares/bootstrap'
import { correlationOf, informationOf, singularValues, studentise } from '../../shared/science/least-squares/covariance'
import { fitModel } from '../../shared/science/least-squares/fitModel'
import { prepareSeparable } from '../../shared/science/least-squares/varpro'
import type { Model } from '../../shared/science/models/define'
import { MODELS, MODEL_IDS } from '../../shared/science/models/index'
import { createRandom } from '../../shared/science/random'

const recovery = MODELS.inversionRecovery3 as Model
const TI_S = [0.03, 0.06, 0.12, 0.2, 0.35, 0.5, 0.8, 1.2, 1.8, 2.6, 4, 6]
const noisy = (seed: string | number, sd = 10) => {
  const random = createRandom(seed)
  return TI_S.map(ti => recovery.evaluate(ti, { a_au: 1000, b_au: -1900, t1_s: 0.9 }) + sd * random.normal())
}

describe('variable projection', () => {
  it.each(MODEL_IDS.filter(id => MODELS[id].separable !== null))('%s: ends where the full search ends, weights included [two ways to one minimum]', (id) => {
    const model = MODELS[id] as Model
    const { x, settings, truth } = model.example
    const random = createRandom(id)
    const exact = x.map(ti => model.evaluate(ti, truth, settings))
    const largest = Math.max(...exact.map(Math.abs))
    const sigma = x.map((_, i) => (largest * (5 + i)) / 5e3)
    const y = exact.map((value, i) => value + sigma[i]! * random.normal())
    const projection = prepareSeparable(model, x, sigma.map(s => 1 / s), settings)!.search(y)
    const fit = fitModel(model, { x, y, sigma }, { settings, start: truth })
    if (!fit.ok) throw new Error(fit.message)
    const values = Object.fromEntries(fit.parameters.map(p => [p.name, p.value]))
    expect(projection.tau / values[model.separable!.nonlinear]!).toBeCloseTo(1, 6)
    model.separable!.linear.forEach((name, c) => expect(projection.linear[c]! / values[name]!).toBeCloseTo(1, 6))
    expect(projection.rss / (fit.reducedChi2! * fit.dof)).toBeCloseTo(1, 9)
  })
  it('never leaves more than any fixed T1 does [property]', () => {
    const search = prepareSeparable(recovery, TI_S, null, {})!
    fc.assert(fc.property(fc.integer({ min: 0, max: 1e6 }), fc.double({ min: 0.01, max: 50, noNaN: true }), fc.double({ min: 1, max: 600, noNaN: true }), (seed, tau, sd) => {
      const y = noisy(seed, sd)
      expect(search.search(y).rss).toBeLessThanOrEqual(search.projectAt(tau, y).rss * (1 + 1e-9))
    }), { seed: 41, numRuns: 150 })
  })
  it('does not depend on what was searched before', () => {
    const search = prepareSeparable(recovery, TI_S, null, {})!
    const first = search.search(noisy(1))
    search.search(noisy(2, 300))
    expect(search.search(noisy(1))).toEqual(first)
  })
})

describe('information of a fit', () => {
  it('gives the singular values of a matrix of small and large ones to full relative accuracy [diagonal times rotation]', () => {
    const [c, s] = [Math.cos(0.7), Math.sin(0.7)]
    const values = singularValues(Float64Array.of(1e6 * c, 1e6 * s, -1e-6 * s, 1e-6 * c), 2)
    expect(values[0]! / 1e6).toBeCloseTo(1, 13)
    expect(values[1]! / 1e-6).toBeCloseTo(1, 13)
  })
  it('inverts JᵀJ, with leverages that sum to the number of parameters [projection matrix]', () => {
    const x = [1, 2, 3, 5, 8]
    const { inverse, leverage, condition, rank } = informationOf(Float64Array.from([...x.map(() => 1), ...x]), 5, [false, false])
    const determinant = 5 * 103 - 19 * 19
    ;[103, -19, -19, 5].forEach((entry, i) => expect(inverse![i]!).toBeCloseTo(entry / determinant, 13))
    expect(leverage!.reduce((sum, h) => sum + h, 0)).toBeCloseTo(2, 13)
    expect(rank).toBe(2)
    expect(condition).toBeGreaterThan(1)
  })
  it('reports a dependent and a zero column as rank-deficient', () => {
    expect(informationOf(Float64Array.of(1, 2, 3, 2, 4, 6), 3, [false, false])).toMatchObject({ inverse: null, condition: null, rank: 1 })
    expect(informationOf(Float64Array.of(1, 2, 3, 0, 0, 0), 3, [false, false]).inverse).toBeNull()
    expect(informationOf(Float64Array.of(1, 2, 3, 0, 0, 0), 3, [false, true]).inverse![0]).toBeCloseTo(1 / 14, 14)
  })
  it('has no studentised residual with one degree of freedom, and none for a point of leverage 1', () => {
    expect(studentise([1, -1], [0.3, 0.3], 1)).toEqual([null, null])
    expect(studentise([0, 1, -1, 2], [1, 0.3, 0.3, 0.4], 2)[0]).toBeNull()
    expect(correlationOf([[4, 2], [2, 0]])).toEqual([[1, 0], [0, 1]])
  })
})

describe('residual bootstrap', () => {
  const data = { x: TI_S, y: noisy('bootstrap') }
  const fit = fitModel(recovery, data)
  if (!fit.ok) throw new Error(fit.message)
  it('spreads like the standard error, within 20 % [Davison & Hinkley, 800 samples; the small set itself costs more than the drawing]', () => {
    const found = bootstrapFit(recovery, data, fit, { seed: 'b', samples: 800 })
    if (!found.ok) throw new Error(found.message)
    found.intervals.forEach(({ sd, low, high }, j) => {
      const { se, value } = fit.parameters[j]!
      expect(Math.abs(sd / se! - 1)).toBeLessThan(0.2)
      expect(low).toBeLessThan(value)
      expect(high).toBeGreaterThan(value)
    })
    expect(found.failed).toBe(0)
  }, 60_000)
  it('draws the same for the same seed and other for another', () => {
    const run = (seed: string) => bootstrapFit(recovery, data, fit, { seed, samples: 50 })
    expect(run('a')).toEqual(run('a'))
    expect(run('a')).not.toEqual(run('b'))
  })
  it('refuses a fit that carries no interval', () => {
    const bare = fitModel(recovery, { x: [0.1, 0.6, 3], y: [-800, 0, 930] })
    expect(bare.ok && bootstrapFit(recovery, { x: [0.1, 0.6, 3], y: [-800, 0, 930] }, bare, { seed: 'a', samples: 10 })).toMatchObject({ ok: false, reason: 'noInterval' })
  })
})

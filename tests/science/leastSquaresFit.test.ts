import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import reference from '../../fixtures/reference/relaxation/fits.json'
import { fitModel, type FitData, type FitOptions } from '../../shared/science/least-squares/fitModel'
import type { FitDone } from '../../shared/science/least-squares/outcome'
import { MODELS, findModel } from '../../shared/science/models/index'
import type { Model } from '../../shared/science/models/define'
import { createRandom } from '../../shared/science/random'
import { tQuantile } from '../../shared/science/statistics'

const recovery = MODELS.inversionRecovery3 as Model
const TI_S = [0.03, 0.06, 0.12, 0.2, 0.35, 0.5, 0.8, 1.2, 1.8, 2.6, 4, 6]
const TRUTH = { a_au: 1000, b_au: -1900, t1_s: 0.9 }

function done(data: FitData, options: FitOptions = {}, model: Model = recovery): FitDone {
  const fit = fitModel(model, data, options)
  if (!fit.ok) throw new Error(fit.message)
  return fit
}
const valuesOf = (fit: FitDone) => fit.parameters.map(p => p.value)
const errorsOf = (fit: FitDone) => fit.parameters.map(p => p.se!)

function noisy(seed: string | number, sd: number, ti_s: readonly number[] = TI_S): number[] {
  const random = createRandom(seed)
  return ti_s.map(ti => recovery.evaluate(ti, TRUTH) + sd * random.normal())
}

function expectRelative(got: readonly number[], wanted: readonly number[], tolerance: number): void {
  got.forEach((value, j) => expect(Math.abs(value / wanted[j]! - 1), `${value} against ${wanted[j]}`).toBeLessThan(tolerance))
}

describe('agreement with other programs', () => {
  reference.sets.forEach((set, k) => {
    it(`set ${k + 1}, ${set.model}, σ ${set.sigmaUsed}: parameters to 1e-7, errors to 1e-5 [SciPy${set.r ? ', R' : ''}]`, () => {
      const fit = done({ x: set.x, y: set.y, sigma: set.sigma }, { settings: set.settings as unknown as Record<string, number> }, findModel(set.model)!)
      expect(fit.converged && fit.noInterval === null).toBe(true)
      expect(fit.sigmaUsed).toBe(set.sigmaUsed)
      for (const other of [set.scipy, ...(set.r ? [set.r] : [])]) {
        expectRelative(valuesOf(fit), other.values, 1e-7)
        expectRelative(errorsOf(fit), other.se, 1e-5)
        const chi2 = set.sigma ? fit.reducedChi2! * fit.dof : fit.rss
        expectRelative([chi2], [other.chi2], 1e-7)
      }
    })
  })
})

describe('what a fit reports', () => {
  const fit = done({ x: TI_S, y: noisy('report', 8) })
  it('states the interval value ± t·SE with n − m degrees of freedom [Student]', () => {
    const t = tQuantile(0.975, 9)
    for (const { value, se, interval } of fit.parameters) expectRelative(interval!, [value - t * se!, value + t * se!], 1e-14)
    expect(fit.dof).toBe(9)
  })
  it('has residuals y − f that sum to zero for a model with a constant [normal equations]', () => {
    expect(Math.abs(fit.residuals.reduce<number>((sum, r) => sum + r!, 0))).toBeLessThan(1e-9)
    expect(fit.rss).toBeCloseTo(fit.residuals.reduce<number>((sum, r) => sum + r! ** 2, 0), 9)
    expect(fit.sigma).toBeCloseTo(Math.sqrt(fit.rss / 9), 12)
  })
  it('has a correlation matrix of unit diagonal that belongs to the covariance', () => {
    const [va, vb] = [fit.covariance![0]![0]!, fit.covariance![1]![1]!]
    expect(fit.correlation![0]![1]).toBeCloseTo(fit.covariance![0]![1]! / Math.sqrt(va * vb), 14)
    expect(fit.correlation!.map((row, j) => row[j])).toEqual([1, 1, 1])
  })
  it('studentises a residual as if its point had been left out [deletion identity]', () => {
    const y = noisy('delete', 8)
    y[4]! += 60
    const all = done({ x: TI_S, y })
    const without = done({ x: TI_S, y, exclude: [4] })
    const predicted = y[4]! - without.fitted[4]!
    const open = (all.residuals[4]! / (all.studentised[4]! * without.sigma!)) ** 2
    // Exact for a linear model; this one bends over a distance of 60, hence 5 %.
    expectRelative([all.residuals[4]! / open], [predicted], 0.05)
    expect(Math.abs(all.studentised[4]!)).toBeGreaterThan(4)
  })
  it('takes χ²red above 1 into the errors and leaves them where it is below [convention of the product]', () => {
    const y = noisy('scale', 8)
    const base = errorsOf(done({ x: TI_S, y, sigma: 80 }))
    expectRelative(errorsOf(done({ x: TI_S, y, sigma: 160 })), base.map(se => 2 * se), 1e-6)
    const tight = done({ x: TI_S, y, sigma: 0.8 })
    expect(tight.reducedChi2).toBeGreaterThan(1)
    expectRelative(errorsOf(tight), errorsOf(done({ x: TI_S, y })), 1e-6)
  })
  it('uses a pooled σ and its degrees of freedom for errors and interval', () => {
    const y = noisy('pool', 8)
    const own = done({ x: TI_S, y })
    const pooled = done({ x: TI_S, y }, { pooledSigma: { sigma: 2 * own.sigma!, dof: 60 } })
    expectRelative(errorsOf(pooled), errorsOf(own).map(se => 2 * se), 1e-9)
    expect(pooled).toMatchObject({ sigmaUsed: 'pooled', intervalDof: 60, dof: 9 })
    expect(pooled.parameters[2]!.interval![1] - pooled.parameters[2]!.value).toBeCloseTo(tQuantile(0.975, 60) * pooled.parameters[2]!.se!, 12)
  })
  it('agrees with its second opinion, and gives the same bits again', () => {
    const again = done({ x: TI_S, y: noisy('report', 8) }, { secondOpinion: true })
    expect(again.secondOpinion!.agrees).toBe(true)
    expect({ ...again, secondOpinion: null }).toEqual(fit)
  })
})

describe('laws a fit obeys', () => {
  const seeds = fc.integer({ min: 0, max: 1e6 })
  it('T1 scales with the times [property]', () => {
    fc.assert(fc.property(seeds, fc.double({ min: 0.02, max: 10, noNaN: true }), (seed, factor) => {
      const y = noisy(seed, 10)
      const [one, other] = [done({ x: TI_S, y }), done({ x: TI_S.map(t => t * factor), y })]
      expectRelative([other.parameters[2]!.value, other.parameters[2]!.se!], [one.parameters[2]!.value * factor, one.parameters[2]!.se! * factor], 1e-8)
    }), { seed: 3, numRuns: 60 })
  }, 60_000)
  it('T1 does not change when the signal is scaled; amplitudes scale along [property]', () => {
    fc.assert(fc.property(seeds, fc.double({ min: 1e-6, max: 1e6, noNaN: true }), (seed, factor) => {
      const y = noisy(seed, 10)
      const [one, other] = [done({ x: TI_S, y }), done({ x: TI_S, y: y.map(v => v * factor) })]
      expectRelative(valuesOf(other), valuesOf(one).map((v, j) => j < 2 ? v * factor : v), 1e-8)
    }), { seed: 4, numRuns: 60 })
  }, 60_000)
  it('the order of the points does not matter [property]', () => {
    fc.assert(fc.property(seeds, fc.shuffledSubarray(TI_S.map((_, i) => i), { minLength: TI_S.length }), (seed, order) => {
      const y = noisy(seed, 10)
      const shuffled = done({ x: order.map(i => TI_S[i]!), y: order.map(i => y[i]!) })
      expectRelative(valuesOf(shuffled), valuesOf(done({ x: TI_S, y })), 1e-10)
    }), { seed: 5, numRuns: 60 })
  }, 60_000)
  it('a point left out changes nothing, whatever its value, NaN included [property]', () => {
    const y = noisy('left out', 10)
    const base = done({ x: TI_S, y, exclude: [3] })
    for (const value of [0, 1e9, NaN, Infinity]) {
      const changed = done({ x: TI_S, y: y.map((v, i) => i === 3 ? value : v), exclude: [3] })
      expect(valuesOf(changed)).toEqual(valuesOf(base))
      expect(changed.residuals[3]).toBeNull()
    }
    expect(valuesOf(done({ x: TI_S.filter((_, i) => i !== 3), y: y.filter((_, i) => i !== 3) }))).toEqual(valuesOf(base))
  })
})

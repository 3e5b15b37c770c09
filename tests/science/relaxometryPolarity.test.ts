import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { Model } from '../../shared/science/models/define'
import { MODELS } from '../../shared/science/models/index'
import { createRandom } from '../../shared/science/random'
import { fitRecovery, restorePolarity } from '../../shared/science/relaxometry/polarity'
import { fitTubes, poolNoise } from '../../shared/science/relaxometry/tubes'
import { chi2UpperP } from '../../shared/science/statistics'

const recovery = MODELS.inversionRecovery3 as Model
const TI_S = [0.03, 0.06, 0.12, 0.2, 0.35, 0.5, 0.8, 1.2, 1.8, 2.6, 4, 6]

function magnitudes(t1_s: number, sd: number, seed: string | number, ti_s: readonly number[] = TI_S) {
  const random = createRandom(seed)
  const signed = ti_s.map(ti => recovery.evaluate(ti, { a_au: 1000, b_au: -1940, t1_s }) + sd * random.normal())
  return { signed, magnitude: signed.map(Math.abs) }
}
const restore = (x: readonly number[], y: readonly number[]) => {
  const polarity = restorePolarity(recovery, { x, y })
  if (!polarity.ok) throw new Error(polarity.message)
  return polarity
}

describe('polarity of magnitude data', () => {
  it('is restored exactly where the noise is 1 % of the plateau and the null lies between points [property, forward model]', () => {
    fc.assert(fc.property(fc.integer({ min: 0, max: 1e6 }), fc.double({ min: 0.15, max: 2, noNaN: true }), (seed, t1_s) => {
      const { signed, magnitude } = magnitudes(t1_s, 2, seed)
      fc.pre(signed.every(value => Math.abs(value) > 40))
      const polarity = restore(TI_S, magnitude)
      expect(polarity.signal).toEqual(signed)
      expect(polarity.isAmbiguous).toBe(false)
    }), { seed: 21, numRuns: 150 })
  }, 60_000)
  it('gives the fit of the signed data to the last bit when the signs come out right', () => {
    const { signed, magnitude } = magnitudes(0.9, 5, 'same')
    const lost = fitRecovery(recovery, { x: TI_S, y: magnitude }, 'magnitude')
    expect(lost.fit).toEqual(fitRecovery(recovery, { x: TI_S, y: signed }, 'signed').fit)
    expect(lost.alternative).toBeNull()
  })
  it.each(['inversionRecovery3', 'inversionRecoveryTiRepeat', 'inversionRecoveryDelay', 'lookLocker'] as const)('works with %s', (id) => {
    const model = MODELS[id] as Model
    const { x, settings, truth } = model.example
    const signed = x.map(ti => model.evaluate(ti, truth, settings))
    const { fit, polarity } = fitRecovery(model, { x, y: signed.map(Math.abs) }, 'magnitude', { settings })
    expect(polarity!.signal).toEqual(signed)
    expect(fit.ok && fit.parameters.at(-1)!.value).toBeCloseTo(Object.values(truth).at(-1)!, 9)
  })
  it('is ambiguous where one noisy point sits on the null, and both T1 are given', () => {
    const ti_s = [0.05, 0.3, 0.62, 1.5, 4]
    const { magnitude } = magnitudes(0.9, 40, 5, ti_s)
    const { polarity, fit, alternative } = fitRecovery(recovery, { x: ti_s, y: magnitude.with(2, 35) }, 'magnitude')
    expect(polarity!.isAmbiguous).toBe(true)
    expect(polarity!.runnerUp!.rss).toBeLessThanOrEqual(1.5 * polarity!.rss)
    const t1 = [fit, alternative!].map(f => f.ok ? f.parameters[2]!.value : NaN)
    expect(t1[0]).not.toBeCloseTo(t1[1]!, 2)
    expect(t1[1]).toBeCloseTo(polarity!.runnerUp!.t1_s, 4)
  })
  it('lets repeats at one inversion time share a sign', () => {
    const ti_s = [...TI_S, ...TI_S]
    const { magnitude } = magnitudes(0.9, 10, 'repeats', ti_s)
    const { signs } = restore(ti_s, magnitude)
    TI_S.forEach((_, i) => expect(signs[i]).toBe(signs[i + TI_S.length]))
  })
  it('knows a tube whose null comes before the first or after the last point', () => {
    expect(restore(TI_S, magnitudes(0.02, 1, 'fast').magnitude).signs.every(sign => sign === 1)).toBe(true)
    const early = TI_S.slice(0, 6)
    expect(restore(early, magnitudes(2, 1, 'slow', early).magnitude).signs.every(sign => sign === -1)).toBe(true)
  })
  it('does not change with the order of the points [property]', () => {
    const { signed, magnitude } = magnitudes(0.7, 5, 'order')
    fc.assert(fc.property(fc.shuffledSubarray(TI_S.map((_, i) => i), { minLength: TI_S.length }), (order) => {
      expect(restore(order.map(i => TI_S[i]!), order.map(i => magnitude[i]!)).signal).toEqual(order.map(i => signed[i]!))
    }), { seed: 22, numRuns: 30 })
  })
  it('has no sign to choose at a magnitude of zero', () => {
    const y = TI_S.map(ti => Math.abs(1000 - 2000 * Math.exp(-ti / 0.9)))
    expect(restore(TI_S, y.with(5, 0).with(5, 0)).isAmbiguous).toBe(false)
  })
  it('refuses a negative magnitude, naming the point, and too few points', () => {
    expect(restorePolarity(recovery, { x: [1, 2, 3, 4], y: [1, -2, 3, 4] })).toMatchObject({ ok: false, reason: 'outOfDomain', message: expect.stringContaining('Point 2') })
    expect(restorePolarity(recovery, { x: [1, 2], y: [1, 2] })).toMatchObject({ ok: false, reason: 'tooFewPoints' })
    expect(fitRecovery(recovery, { x: [1, 2, 3], y: [4, 4, 4] }, 'magnitude').fit).toMatchObject({ ok: false, reason: 'constantSignal' })
  })
})

describe('tubes of one series', () => {
  const series = (sds: readonly number[]) => sds.map((sd, k) => ({ x: TI_S, y: magnitudes(2 / (k + 1), sd, `tube ${k}`).signed }))
  it('share one σ with the degrees of freedom of all, Σrss/Σdof [definition]', () => {
    const { tubes, pools } = fitTubes(recovery, series([10, 10, 10, 10]), 'signed')
    const own = series([10, 10, 10, 10]).map(data => fitRecovery(recovery, data, 'signed').fit)
    const rss = own.reduce((sum, fit) => sum + (fit.ok ? fit.rss : NaN), 0)
    for (const [k, { fit }] of tubes.entries()) {
      expect(fit).toMatchObject({ sigmaUsed: 'pooled', intervalDof: 36 })
      expect(fit.ok && fit.sigma).toBeCloseTo(Math.sqrt(rss / 36), 12)
      expect(pools[k]!.dof).toBe(36)
    }
  })
  it('stand alone where their noise differs [Bartlett] or they were sampled otherwise', () => {
    const unequal = fitTubes(recovery, series([1, 1, 100, 100]), 'signed')
    expect(unequal.pools).toEqual([null, null, null, null])
    const [first, second, third] = series([10, 10, 10])
    const mixed = fitTubes(recovery, [first!, second!, { x: third!.x.map(t => 2 * t), y: third!.y }], 'signed')
    expect(mixed.pools.map(pool => pool !== null)).toEqual([true, true, false])
    const left = fitTubes(recovery, [first!, second!, { ...third!, exclude: [4] }], 'signed')
    expect(left.pools.map(pool => pool !== null)).toEqual([true, true, false])
  })
  it('keeps a refused tube as refused beside the others', () => {
    const { tubes, pools } = fitTubes(recovery, [...series([10, 10]), { x: TI_S, y: TI_S.map(() => 3) }], 'signed')
    expect(tubes.map(tube => tube.fit.ok)).toEqual([true, true, false])
    expect(pools[2]).toBeNull()
  })
  it('computes Bartlett\'s statistic: variances 1 and 4 with 10 degrees of freedom each give 4.25 [closed form]', () => {
    const { equalVarianceP } = poolNoise([{ rss: 10, dof: 10 }, { rss: 40, dof: 10 }])
    const statistic = (20 * Math.log(2.5) - 10 * Math.log(4)) / (1 + (0.2 - 0.05) / 3)
    expect(statistic).toBeCloseTo(4.25, 2)
    expect(equalVarianceP).toBeCloseTo(chi2UpperP(statistic, 1), 12)
  })
})

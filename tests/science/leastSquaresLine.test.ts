import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import nist from '../../fixtures/reference/nist/linear.json'
import lm from '../../fixtures/reference/line/lm.json'
import pearson from '../../fixtures/reference/york/pearson.json'
import { fitModel, problemOf } from '../../shared/science/least-squares/fitModel'
import { prepareData } from '../../shared/science/least-squares/fitData'
import { fitLine, lineBand, type LineData } from '../../shared/science/least-squares/line'
import { profileInterval } from '../../shared/science/least-squares/profile'
import { solve } from '../../shared/science/least-squares/trustRegion'
import { fitYork, type YorkData } from '../../shared/science/least-squares/york'
import { defineModel, type Model } from '../../shared/science/models/define'
import { MODELS } from '../../shared/science/models/index'

const line = (data: LineData) => {
  const fit = fitLine(data)
  if (!fit.ok) throw new Error(fit.message)
  return fit
}
const york = (data: YorkData) => {
  const fit = fitYork(data)
  if (!fit.ok) throw new Error(fit.message)
  return fit
}
const near = (got: number | null, wanted: number, tolerance: number) => {
  expect(got).not.toBeNull()
  expect(Math.abs(got! - wanted), `${got} against ${wanted}`).toBeLessThanOrEqual(tolerance * Math.abs(wanted))
}

const proportional = defineModel({
  ...MODELS.inversionRecovery3, id: 'proportional', separable: null, params: { b: { label: 'b', unit: '', min: -1e9, max: 1e9 } }, guess: () => ({ b: 1 }),
  example: { x: [1], settings: {}, truth: { b: 1 } },
  valueAndGradient(x, p, _settings, g) {
    g[0] = x
    return p[0]! * x
  },
}) as Model

describe('weighted line', () => {
  it('Norris: intercept, slope and their errors to 11 digits [NIST StRD, from memory, checked in rational arithmetic]', () => {
    const { x, y, certified } = nist.problems[0]!
    const fit = line({ x, y })
    const found = [fit.intercept, fit.interceptSe!, fit.slope, fit.slopeSe!]
    found.forEach((value, j) => near(value, certified[j]!, 1e-11))
  })
  it('NoInt1 and NoInt2 through the general engine: slope and error to 12 digits [NIST StRD, from memory, checked in rational arithmetic]', () => {
    for (const { x, y, certified } of nist.problems.slice(1)) {
      const fit = fitModel(proportional, { x, y })
      if (!fit.ok) throw new Error(fit.message)
      near(fit.parameters[0]!.value, certified[0]!, 1e-12)
      near(fit.parameters[0]!.se, certified[1]!, 1e-12)
    }
  })
  lm.sets.forEach((set, k) => {
    it(`set ${k + 1}${set.weighted ? ', weighted' : ''}: coefficients, errors, influence, curvature to 9 digits [R lm]`, () => {
      const fit = line({ x: set.x, y: set.y, sigma: set.weighted ? set.sigma : null })
      near(fit.intercept, set.coefficients[0]!, 1e-10)
      near(fit.slope, set.coefficients[1]!, 1e-10)
      const factor = Math.sqrt(set.weighted ? Math.max(1, set.s2) : set.s2)
      near(fit.interceptSe, set.seUnscaled[0]! * factor, 1e-9)
      near(fit.slopeSe, set.seUnscaled[1]! * factor, 1e-9)
      near(fit.r2, set.r2, 1e-9)
      near(fit.quadraticP, set.quadraticP, 1e-7)
      if (set.weighted) near(fit.reducedChi2, set.s2, 1e-9)
      fit.points.forEach((point, i) => {
        near(point.cook, set.cook[i]!, 1e-8)
        near(point.studentised, set.studentised[i]!, 1e-8)
        near(point.without!.slope, set.without[i]!, 1e-9)
      })
    })
  })
  it('has the narrowest band at the weighted mean and the intercept interval at zero [closed form]', () => {
    const fit = line({ x: [0, 0.5, 1, 2], y: [0.3, 2.5, 4.4, 8.7], sigma: [0.05, 0.05, 0.1, 0.2] })
    near(lineBand(fit, 0).halfWidth, (fit.interceptInterval![1] - fit.interceptInterval![0]) / 2, 1e-12)
    expect(lineBand(fit, 0.4).halfWidth).toBeLessThan(lineBand(fit, 2).halfWidth!)
  })
  it('states no interval through two points, and no error unless σ is known', () => {
    expect(line({ x: [0, 1], y: [1, 3] })).toMatchObject({ slope: 2, slopeSe: null, slopeInterval: null, quadraticP: null, dof: 0 })
    expect(line({ x: [0, 1], y: [1, 3], sigma: [0.1, 0.1] })).toMatchObject({ slopeInterval: null, reducedChi2: null })
    expect(line({ x: [0, 1], y: [1, 3], sigma: [0.1, 0.1] }).slopeSe).toBeCloseTo(0.1 * Math.SQRT2, 14)
  })
  it('refuses one point, equal x, NaN and a zero error', () => {
    expect(fitLine({ x: [1], y: [1] })).toMatchObject({ ok: false, reason: 'tooFewPoints' })
    expect(fitLine({ x: [2, 2, 2], y: [1, 2, 3] })).toMatchObject({ ok: false, reason: 'equalX', message: 'Every point stands at x = 2.' })
    expect(fitLine({ x: [1, NaN], y: [1, 2] })).toMatchObject({ ok: false, reason: 'notFinite' })
    expect(fitLine({ x: [1, 2], y: [1, 2], sigma: [1, 0] })).toMatchObject({ ok: false, reason: 'badSigma' })
    expect(fitLine({ x: [1, 2], y: [1] })).toMatchObject({ ok: false, reason: 'lengthMismatch' })
  })
})

describe('line with errors in both coordinates', () => {
  const root = (weights: readonly number[]) => weights.map(w => 1 / Math.sqrt(w))
  const data: YorkData = { x: pearson.x, y: pearson.y, xSigma: root(pearson.xWeight), ySigma: root(pearson.yWeight) }
  it('Pearson\'s data with York\'s weights: 5.47991, −0.480533, errors 0.29497 and 0.05799 [York et al. 2004, from memory]', () => {
    const fit = york(data)
    expect(fit.intercept).toBeCloseTo(pearson.intercept, 5)
    expect(fit.slope).toBeCloseTo(pearson.slope, 6)
    expect(Math.abs(fit.interceptSeUnscaled - pearson.interceptSe)).toBeLessThan(6e-6)
    expect(Math.abs(fit.slopeSeUnscaled - pearson.slopeSe)).toBeLessThan(6e-6)
    expect(fit.slopeSe / fit.slopeSeUnscaled).toBeCloseTo(Math.sqrt(fit.reducedChi2!), 12)
  })
  it('is the weighted line when x has no error [limit]', () => {
    const sigma = root(pearson.yWeight)
    const plain = line({ x: data.x, y: data.y, sigma })
    const fit = york({ ...data, xSigma: data.x.map(() => 0), ySigma: sigma })
    near(fit.slope, plain.slope, 1e-12)
    near(fit.slopeSe, plain.slopeSe!, 1e-12)
    near(fit.interceptSe, plain.interceptSe!, 1e-12)
    near(fit.chi2, plain.rss, 1e-12)
  })
  it('gives the inverse slope when the coordinates change places [symmetry of the method]', () => {
    const swapped = york({ x: data.y, y: data.x, xSigma: data.ySigma, ySigma: data.xSigma })
    near(1 / swapped.slope, york(data).slope, 1e-10)
  })
  it('takes the correlation of the errors of a point into account, and keeps the symmetry', () => {
    const correlation = data.x.map((_, i) => i % 2 ? 0.6 : -0.3)
    const fit = york({ ...data, correlation })
    expect(Math.abs(fit.slope / york(data).slope - 1)).toBeGreaterThan(1e-4)
    near(1 / york({ x: data.y, y: data.x, xSigma: data.ySigma, ySigma: data.xSigma, correlation }).slope, fit.slope, 1e-10)
  })
  it('does not depend on the order of the points [property]', () => {
    fc.assert(fc.property(fc.shuffledSubarray(data.x.map((_, i) => i), { minLength: 10 }), (order) => {
      const pick = (values: readonly number[]) => order.map(i => values[i]!)
      near(york({ x: pick(data.x), y: pick(data.y), xSigma: pick(data.xSigma), ySigma: pick(data.ySigma) }).slope, york(data).slope, 1e-12)
    }), { seed: 6, numRuns: 20 })
  })
  it('refuses a point without any error, equal x and unequal lists', () => {
    expect(fitYork({ ...data, xSigma: data.x.map(() => 0), ySigma: data.x.map(() => 0) })).toMatchObject({ ok: false, reason: 'badSigma' })
    expect(fitYork({ ...data, x: data.x.map(() => 1) })).toMatchObject({ ok: false, reason: 'equalX' })
    expect(fitYork({ ...data, y: [1] })).toMatchObject({ ok: false, reason: 'lengthMismatch' })
  })
})

describe('profile interval', () => {
  it('is value ± t·SE for a linear parameter [Bates & Watts, section 6.1]', () => {
    const { x, y } = nist.problems[0]!
    const n = x.length
    const problem = {
      n, m: 2, lower: new Float64Array(2).fill(-Infinity), upper: new Float64Array(2).fill(Infinity),
      evaluate(p: Float64Array, r: Float64Array, j: Float64Array) {
        x.forEach((value, i) => {
          r[i] = p[0]! + p[1]! * value - y[i]!
          j[i] = 1
          j[n + i] = value
        })
      },
    }
    const best = solve(problem, [0, 1])
    const plain = line({ x, y })
    const profile = profileInterval(problem, best, { at: 1, se: plain.slopeSe!, variance: plain.rss / plain.dof }, { level: 0.95, dof: plain.dof })
    near(profile.low, plain.slopeInterval![0], 1e-8)
    near(profile.high, plain.slopeInterval![1], 1e-8)
  })
  it('leans towards long T1 where the recovery is cut off, and ends open where nothing limits it', () => {
    const model = MODELS.inversionRecovery3 as Model
    const x = [0.1, 0.2, 0.3, 0.45, 0.6, 0.8]
    const y = x.map((t, i) => model.evaluate(t, { a_au: 1000, b_au: -1900, t1_s: 0.9 }) + [4, -5, 3, 2, -6, 2][i]!)
    const fit = fitModel(model, { x, y })
    if (!fit.ok) throw new Error(fit.message)
    const prepared = prepareData(model, { x, y }, {}, 3)
    if (!prepared.ok) throw new Error(prepared.message)
    const values = fit.parameters.map(p => p.value)
    const problem = problemOf(model, prepared, [0, 1, 2], Float64Array.from(values))
    const { value, se } = fit.parameters[2]!
    const profile = profileInterval(problem, solve(problem, values), { at: 2, se: se!, variance: fit.sigma! ** 2 }, { level: 0.95, dof: fit.dof })
    expect(profile.high! - value).toBeGreaterThan(1.1 * (value - profile.low!))
    const open = profileInterval(problem, solve(problem, values), { at: 2, se: se!, variance: (40 * fit.sigma!) ** 2 }, { level: 0.95, dof: fit.dof })
    expect(open.high).toBeNull()
  })
})

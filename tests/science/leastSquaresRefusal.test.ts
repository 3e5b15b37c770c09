import { describe, expect, it } from 'vitest'
import { fitModel, problemOf, type FitData, type FitOptions } from '../../shared/science/least-squares/fitModel'
import { prepareData } from '../../shared/science/least-squares/fitData'
import { findSecondOpinion } from '../../shared/science/least-squares/secondOpinion'
import { solve } from '../../shared/science/least-squares/trustRegion'
import { defineModel, type Model } from '../../shared/science/models/define'
import { MODELS } from '../../shared/science/models/index'

const recovery = MODELS.inversionRecovery3 as Model
const X = [0.05, 0.1, 0.3, 0.8, 2, 4]
const Y = [-820, -700, -280, 390, 850, 990]

const refused = (data: FitData, options: FitOptions = {}) => {
  const fit = fitModel(recovery, data, options)
  if (fit.ok) throw new Error('a fit was made')
  expect(fit.message.length).toBeGreaterThan(10)
  expect(fit.accepted.length).toBeGreaterThan(10)
  return fit
}
const done = (data: FitData, options: FitOptions = {}, model: Model = recovery) => {
  const fit = fitModel(model, data, options)
  if (!fit.ok) throw new Error(fit.message)
  return fit
}

describe('what cannot be fitted is refused with the place and what would be accepted', () => {
  it('NaN or infinity in the signal or the time', () => {
    expect(refused({ x: X, y: Y.with(2, NaN) })).toMatchObject({ reason: 'notFinite', message: 'Point 3: the signal is not a number.' })
    expect(refused({ x: X.with(4, Infinity), y: Y })).toMatchObject({ reason: 'notFinite', message: 'Point 5: x is not a number.' })
  })
  it('one point, two points, none', () => {
    expect(refused({ x: [0.1], y: [5] }).reason).toBe('tooFewPoints')
    expect(refused({ x: [0.1, 0.2], y: [5, 6] })).toMatchObject({ reason: 'tooFewPoints', accepted: 'At least 3 points; 4 for an interval.' })
    expect(refused({ x: [], y: [] }).reason).toBe('tooFewPoints')
    expect(refused({ x: X, y: Y, exclude: [0, 1, 2, 3] }).reason).toBe('tooFewPoints')
  })
  it('a constant signal, and points all at two times', () => {
    expect(refused({ x: X, y: X.map(() => 7) })).toMatchObject({ reason: 'constantSignal', message: 'Every signal is 7.' })
    expect(refused({ x: [1, 1, 1, 2, 2], y: [1, 2, 3, 4, 5] }).reason).toBe('tooFewDistinct')
  })
  it('lists of unequal length, a σ of zero, a point left out that does not exist', () => {
    expect(refused({ x: X, y: Y.slice(1) }).reason).toBe('lengthMismatch')
    expect(refused({ x: X, y: Y, sigma: [1, 1] }).reason).toBe('lengthMismatch')
    expect(refused({ x: X, y: Y, sigma: 0 }).reason).toBe('badSigma')
    expect(refused({ x: X, y: Y, sigma: [1, 1, NaN, 1, 1, 1] }).message).toContain('Point 3')
    expect(refused({ x: X, y: Y, exclude: [6] }).message).toContain('Point 7')
  })
  it('start values at which the model has no finite value', () => {
    const broken = defineModel({ ...MODELS.inversionRecovery3, id: 'broken', separable: null, valueAndGradient: () => NaN }) as Model
    expect(fitModel(broken, { x: X, y: Y })).toMatchObject({ ok: false, reason: 'modelNotFinite' })
    const blind = defineModel({ ...MODELS.inversionRecovery3, id: 'blind', separable: null, guess: () => null }) as Model
    expect(fitModel(blind, { x: X, y: Y })).toMatchObject({ ok: false, reason: 'noStart' })
  })
  it('throws for a parameter the model does not have: that is a bug, not data', () => {
    expect(() => fitModel(recovery, { x: X, y: Y }, { fixed: { t2_s: 1 } })).toThrow('no parameter t2_s')
  })
})

describe('no interval is stated', () => {
  it('with as many points as parameters', () => {
    const fit = done({ x: [0.1, 0.6, 3], y: [-800, 0, 930] })
    expect(fit).toMatchObject({ dof: 0, sigma: null, covariance: null, noInterval: { reason: 'tooFewPoints' } })
    expect(fit.parameters.every(p => p.se === null && p.interval === null)).toBe(true)
  })
  it('on a bound: the signal of a straight line drives T1 to its limit', () => {
    const fit = done({ x: X, y: X.map((x, i) => 10 * x + (i % 2)) })
    expect(fit.noInterval?.reason).toMatch(/onBound|rankDeficient/)
    expect(fit.parameters.every(p => p.interval === null)).toBe(true)
  })
  it('on a bound of the amplitude: m0 cannot be negative, and its error is null', () => {
    const model = MODELS.inversionRecoveryDelay as Model
    const fit = done({ x: X, y: Y.map(y => -y) }, { settings: { td_s: 5 } }, model)
    expect(fit.noInterval?.reason).toMatch(/onBound|rankDeficient/)
    expect(fit.parameters[0]).toMatchObject({ value: 0, se: null, interval: null, atBound: true })
  })
  it('when two parameters cannot be told apart', () => {
    const twin = defineModel({
      ...MODELS.inversionRecovery3, id: 'twin', separable: null, example: { ...MODELS.inversionRecovery3.example },
      valueAndGradient(x, p, _settings, g) {
        g[0] = 1
        g[1] = 1
        g[2] = x
        return p[0]! + p[1]! + p[2]! * x
      },
    }) as Model
    const fit = done({ x: X, y: Y }, {}, twin)
    expect(fit).toMatchObject({ condition: null, covariance: null, noInterval: { reason: 'rankDeficient' } })
    expect(fit.parameters.every(p => p.se === null)).toBe(true)
  })
  it('when the search was cut short', () => {
    const fit = done({ x: X, y: Y }, { start: { a_au: 1, b_au: 1, t1_s: 90 }, solve: { maxEvaluations: 3 } })
    expect(fit).toMatchObject({ converged: false, stop: 'maxEvaluations', noInterval: { reason: 'notConverged' } })
    expect(fit.parameters.every(p => p.interval === null && p.se === null)).toBe(true)
  })
})

describe('held parameters and bounds', () => {
  it('holds a parameter at the value given and reports only the rest', () => {
    const fit = done({ x: X, y: Y }, { fixed: { a_au: 1000 } })
    expect(fit.fixed).toEqual({ a_au: 1000 })
    expect(fit.parameters.map(p => p.name)).toEqual(['b_au', 't1_s'])
    expect(fit.dof).toBe(4)
  })
  it('finds the best point on the edge of a box [Kuhn–Tucker conditions]', () => {
    // ‖p − (3, −2)‖² over [0, 1] × [−1, 5] has its minimum at (1, −1).
    const solution = solve({
      n: 2, m: 2, lower: Float64Array.of(0, -1), upper: Float64Array.of(1, 5),
      evaluate(p, r, j) {
        r[0] = p[0]! - 3
        r[1] = p[1]! + 2
        j.set([1, 0, 0, 1])
      },
    }, [0.5, 2])
    expect([...solution.parameters]).toEqual([1, -1])
    expect(solution.atBound).toEqual([true, true])
    expect(solution.converged).toBe(true)
  })
  it('leaves a bound it started on when the data pull inwards', () => {
    // Correlated columns: the Gauss–Newton step runs out of the box although the minimum (0.2, 0.7) is inside.
    const solution = solve({
      n: 3, m: 2, lower: Float64Array.of(0, 0), upper: Float64Array.of(1, 1),
      evaluate(p, r, j) {
        const [a, b] = [p[0]! - 0.2, p[1]! - 0.7]
        r.set([a + 0.99 * b, 0.99 * a + b, a * b * 3])
        j.set([1, 0.99, 3 * b, 0.99, 1, 3 * a])
      },
    }, [0, 0])
    expect(solution.parameters[0]).toBeCloseTo(0.2, 10)
    expect(solution.parameters[1]).toBeCloseTo(0.7, 10)
  })
})

describe('second opinion', () => {
  it('flags a fit that is not at the lowest minimum', () => {
    const prepared = prepareData(recovery, { x: X, y: Y }, {}, 3)
    if (!prepared.ok) throw new Error(prepared.message)
    const problem = problemOf(recovery, prepared, [0, 1, 2], Float64Array.of(1000, -1900, 0.9))
    const best = solve(problem, [1000, -1900, 0.9])
    expect(findSecondOpinion(problem, best, [900, -1500, 0.6]).agrees).toBe(true)
    const cutShort = solve(problem, [1100, -1500, 0.5], { maxEvaluations: 2, polishSteps: 0 })
    const opinion = findSecondOpinion(problem, cutShort, [1000, -1900, 0.8])
    expect(opinion.agrees).toBe(false)
    expect(opinion.sumOfSquares / best.sumOfSquares).toBeCloseTo(1, 4)
  })
})

import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { fitModel } from '../../shared/science/least-squares/fitModel'
import { defineModel, withStandards, type Model } from '../../shared/science/models/define'
import { MODELS, MODEL_IDS, findModel } from '../../shared/science/models/index'
import { inversionRecovery3 } from '../../shared/science/models/inversionRecovery3'
import { inversionRecoveryDelay } from '../../shared/science/models/inversionRecoveryDelay'
import { inversionRecoveryTiRepeat } from '../../shared/science/models/inversionRecoveryTiRepeat'

describe.each(MODEL_IDS.map(id => [id, MODELS[id] as Model] as const))('%s', (id, model) => {
  const { x, settings, truth } = model.example
  const y = x.map(t => model.evaluate(t, truth, settings))

  it('is registered under its own id with a source, an equation and a version', () => {
    expect(model.id).toBe(id)
    expect(model.source).toMatch(/\(\d{4}\)/)
    expect(model.equation).toContain('=')
    expect(model.version).toBeGreaterThanOrEqual(1)
  })
  it('recovers the parameters of its noise-free example to 10 digits [forward model]', () => {
    const fit = fitModel(model, { x, y }, { settings })
    if (!fit.ok) throw new Error(fit.message)
    expect(fit.converged).toBe(true)
    for (const { name, value } of fit.parameters) expect(Math.abs(value / truth[name]! - 1)).toBeLessThan(1e-10)
  })
  it('guesses start values inside its bounds from its example', () => {
    const guess = model.guess(x, y, withStandards(model.settings, settings))!
    for (const name of model.names) {
      expect(guess[name]).toBeGreaterThanOrEqual(model.params[name]!.min)
      expect(guess[name]).toBeLessThanOrEqual(model.params[name]!.max)
    }
  })
  it('reaches the same minimum from its own guess as from the projection', () => {
    const guess = model.guess(x, y, withStandards(model.settings, settings))!
    const fit = fitModel(model, { x, y }, { settings, start: guess })
    if (!fit.ok) throw new Error(fit.message)
    for (const { name, value } of fit.parameters) expect(Math.abs(value / truth[name]! - 1)).toBeLessThan(1e-9)
  })
  it('has the derivatives that differences give [central differences, Richardson]', () => {
    fc.assert(fc.property(fc.double({ min: 0.02, max: 5, noNaN: true }), fc.array(fc.double({ min: 0.5, max: 2, noNaN: true }), { minLength: 5, maxLength: 5 }), (ti, factors) => {
      const p = Object.fromEntries(model.names.map((name, j) => [name, truth[name]! * factors[j]!]))
      const gradient = model.jacobian(ti, p, settings)
      for (const name of model.names) {
        const at = (h: number) => (model.evaluate(ti, { ...p, [name]: p[name]! + h }, settings) - model.evaluate(ti, { ...p, [name]: p[name]! - h }, settings)) / (2 * h)
        const h = 1e-3 * Math.abs(p[name]!)
        const differences = (4 * at(h / 2) - at(h)) / 3
        // Truncation is of order h⁴, rounding of order 1e-16·f/h.
        expect(Math.abs(gradient[name]! - differences)).toBeLessThan(1e-7 * (Math.abs(gradient[name]!) + Math.max(...Object.values(truth).map(Math.abs)) / Math.abs(p[name]!)))
      }
    }), { seed: 11, numRuns: 200 })
  })
  it('gives NaN for NaN and refuses negative times, naming the point', () => {
    expect(model.evaluate(NaN, truth, settings)).toBeNaN()
    const fit = fitModel(model, { x: [-1, ...x.slice(1)], y }, { settings })
    expect(fit).toMatchObject({ ok: false, reason: 'outOfDomain' })
    expect(!fit.ok && fit.message).toContain('Point 1')
  })
})

describe('inversion recovery', () => {
  it('passes through zero at TI = T1·ln 2 for a perfect pulse and full recovery [closed form]', () => {
    expect(inversionRecovery3.evaluate(1.2 * Math.LN2, { a_au: 1000, b_au: -2000, t1_s: 1.2 })).toBeCloseTo(0, 9)
    expect(inversionRecoveryTiRepeat.evaluate(1.2 * Math.LN2, { m0_au: 1000, t1_s: 1.2 }, { tr_s: 100 })).toBeCloseTo(0, 9)
    expect(inversionRecoveryDelay.evaluate(1.2 * Math.LN2, { m0_au: 1000, t1_s: 1.2 }, { td_s: 100 })).toBeCloseTo(0, 9)
  })
  it('gives one signal for TR = TI + Td in both timings [the two formulas describe one sequence]', () => {
    for (const theta_rad of [Math.PI, 2.7]) {
      for (const ti of [0.1, 0.4, 1.1]) {
        const repeat = inversionRecoveryTiRepeat.evaluate(ti, { m0_au: 500, t1_s: 0.8 }, { tr_s: ti + 1.3, theta_rad })
        expect(inversionRecoveryDelay.evaluate(ti, { m0_au: 500, t1_s: 0.8 }, { td_s: 1.3, theta_rad })).toBeCloseTo(repeat, 10)
      }
    }
  })
  it('follows magnetisation stepped through many repetitions [numerical steady state]', () => {
    const t1_s = 0.8
    const recover = (m: number, t: number) => 1 + (m - 1) * Math.exp(-t / t1_s)
    let m = 1
    let read = 0
    for (let k = 0; k < 50; k++) {
      read = recover(Math.cos(2.9) * m, 0.3)
      m = recover(0, 1.1)
    }
    expect(inversionRecoveryDelay.evaluate(0.3, { m0_au: 1, t1_s }, { td_s: 1.1, theta_rad: 2.9 })).toBeCloseTo(read, 12)
  })
  it('refuses TR shorter than the longest TI and asks which timing was meant', () => {
    const fit = fitModel(inversionRecoveryTiRepeat as Model, { x: [0.1, 0.5, 3], y: [-800, -100, 900] }, { settings: { tr_s: 2 } })
    expect(fit).toMatchObject({ ok: false, reason: 'impossibleTiming' })
    expect(!fit.ok && fit.message).toContain('Is TR the delay after the read-out instead?')
  })
  it('asks for TR where it is not given', () => {
    const fit = fitModel(inversionRecoveryTiRepeat as Model, { x: [0.1, 0.5, 3], y: [-800, -100, 900] })
    expect(fit).toMatchObject({ ok: false, reason: 'badSetting', message: 'TR, inversion to inversion is not given.' })
  })
})

describe('declaration', () => {
  it('finds models by id and nothing by another name', () => {
    expect(findModel('inversionRecovery3')?.id).toBe('inversionRecovery3')
    expect(findModel('constructor')).toBeNull()
  })
  it('rejects bounds the wrong way round and a separable part that leaves a parameter out', () => {
    const { names: _names, lower: _lower, upper: _upper, evaluate: _evaluate, jacobian: _jacobian, ...spec } = inversionRecovery3
    expect(() => defineModel({ ...spec, params: { ...spec.params, t1_s: { label: 'T1', unit: 's', min: 2, max: 1 } } })).toThrow('bounds of t1_s')
    expect(() => defineModel({ ...spec, separable: { ...spec.separable!, linear: ['a_au'] } })).toThrow('does not cover')
  })
})

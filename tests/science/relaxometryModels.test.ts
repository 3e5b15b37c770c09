import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { fitModel } from '../../shared/science/least-squares/fitModel'
import type { FitDone } from '../../shared/science/least-squares/outcome'
import type { Model } from '../../shared/science/models/define'
import { MODELS, MODEL_IDS } from '../../shared/science/models/index'
import { createRandom } from '../../shared/science/random'

/** Models whose abscissa is a time, with the parameter that scales with it. */
const TIMED = MODEL_IDS.filter(id => MODELS[id].x.dimension === 'time')
const constantOf = (model: Model): string => ['t1_s', 't2_s', 't1Star_s'].find(name => model.names.includes(name))!

function noisy(model: Model, seed: string | number, relative = 0.004): number[] {
  const random = createRandom(`${model.id} ${seed}`)
  const { x, settings, truth } = model.example
  const exact = x.map(at => model.evaluate(at, truth, settings))
  const size = Math.max(...exact.map(Math.abs))
  return exact.map(value => value + relative * size * random.normal())
}

function done(model: Model, y: readonly number[], { x = model.example.x, exclude = [] as number[], settings = model.example.settings } = {}): FitDone {
  const fit = fitModel(model, { x, y, exclude }, { settings, start: model.guess(x.filter((_, i) => !exclude.includes(i)), y.filter((_, i) => !exclude.includes(i)), settings) ?? {} })
  if (!fit.ok) throw new Error(fit.message)
  return fit
}

const value = (fit: FitDone, name: string): number => fit.parameters.find(one => one.name === name)!.value

/** Paths of numbers in an answer that are none. */
function notFinite(answer: unknown, path = ''): string[] {
  if (typeof answer === 'number') return Number.isFinite(answer) ? [] : [path]
  if (typeof answer !== 'object' || answer === null) return []
  return Object.entries(answer).flatMap(([key, inner]) => notFinite(inner, `${path}.${key}`))
}

describe.each(TIMED.map(id => [id, MODELS[id] as Model] as const))('%s', (_id, model) => {
  const name = constantOf(model)
  it('scales its time constant with its times, errors included [dimension analysis]', () => {
    fc.assert(fc.property(fc.integer({ min: 0, max: 999 }), fc.double({ min: 0.2, max: 4, noNaN: true }), (seed, factor) => {
      const y = noisy(model, seed)
      const a = done(model, y)
      const settings = Object.fromEntries(Object.entries(model.example.settings).map(([key, one]) => [key, key.endsWith('_s') ? one * factor : one]))
      const b = done(model, y, { x: model.example.x.map(at => at * factor), settings })
      expect(value(b, name) / value(a, name)).toBeCloseTo(factor, 6)
      const [sa, sb] = [a, b].map(fit => fit.parameters.find(one => one.name === name)!.se)
      if (sa != null && sb != null) expect(sb / sa).toBeCloseTo(factor, 4)
    }), { seed: 61, numRuns: 25 })
  })
})

describe.each(MODEL_IDS.map(id => [id, MODELS[id] as Model] as const))('%s', (id, model) => {
  const { x, settings } = model.example
  it('gives the same whatever the order of its points [invariance]', () => {
    fc.assert(fc.property(fc.integer({ min: 0, max: 999 }), (seed) => {
      const y = noisy(model, seed)
      const random = createRandom(`order ${seed}`)
      const order = x.map((_, i) => ({ i, key: random.uniform() })).sort((a, b) => a.key - b.key).map(one => one.i)
      const [a, b] = [done(model, y), done(model, order.map(i => y[i]!), { x: order.map(i => x[i]!) })]
      for (const one of a.parameters) expect(Math.abs(value(b, one.name) - one.value)).toBeLessThanOrEqual(1e-7 * Math.abs(one.value) + 1e-9)
    }), { seed: 62, numRuns: 15 })
  })

  it('is not changed by a point that is left out, whatever it says [exclusions]', () => {
    const y = noisy(model, 'left out')
    const without = done(model, y.filter((_, i) => i !== 3), { x: x.filter((_, i) => i !== 3) })
    for (const wild of [1e9, -1e9, 0]) expect(done(model, y.with(3, wild), { exclude: [3] }).parameters.map(one => one.value)).toEqual(without.parameters.map(one => one.value))
  })

  it('holds at signals of 1e-12 and of 1e12: units are anybody\'s choice', () => {
    if (id === 'bindingIsotherm') return
    const y = noisy(model, 'scale')
    const plain = done(model, y)
    for (const factor of [1e-12, 1e12]) {
      const scaled = done(model, y.map(one => one * factor))
      for (const name of ['t1_s', 't2_s', 't1Star_s'].filter(one => model.names.includes(one))) expect(value(scaled, name) / value(plain, name)).toBeCloseTo(1, 6)
    }
  })

  const y = noisy(model, 'bad')
  it.each([
    ['fewer points than parameters', x.slice(0, 1), y.slice(0, 1)], ['no point', [], []], ['all equal', x, y.map(() => 7)], ['all zero', x, y.map(() => 0)], ['one not a number', x, y.with(2, Number.NaN)],
    ['one infinite', x, y.with(2, Infinity)], ['a negative abscissa', x.map((at, i) => i === 0 ? -0.1 : at), y], ['one abscissa for all', x.map(() => x[3]!), y],
  ])('refuses in words: %s', (_what, badX, badY) => {
    const fit = fitModel(model, { x: badX, y: badY }, { settings })
    expect(fit.ok).toBe(false)
    if (!fit.ok) expect([fit.message.length > 10, fit.accepted.length > 5]).toEqual([true, true])
  })
  it.each([['zero', 0], ['negative', -1], ['not a number', Number.NaN]])('refuses a standard deviation that is %s', (_what, bad) => {
    expect(fitModel(model, { x, y, sigma: y.map((_, i) => i === 1 ? bad : 1) }, { settings })).toMatchObject({ ok: false, reason: 'badSigma' })
  })
  it('answers wild signals with numbers or words, within its evaluations: no NaN, no hang [robustness]', () => {
    fc.assert(fc.property(fc.array(fc.double({ min: -1e6, max: 1e6, noNaN: true }), { minLength: x.length, maxLength: x.length }), (wild) => {
      const fit = fitModel(model, { x, y: wild }, { settings })
      if (!fit.ok) return
      expect(notFinite(fit)).toEqual([])
      expect(fit.evaluations).toBeLessThanOrEqual(200 * (model.names.length + 1) + 200)
      if (fit.noInterval) expect(fit.parameters.every(one => one.interval === null)).toBe(true)
    }), { seed: 63, numRuns: 60 })
  })
})

import { readFileSync } from 'node:fs'
import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { lossFraction, lossOf, lossSlope, type Residence } from '#shared/science/placement/loss'
import { timesConcentration, unboundFraction, unboundTotal } from '#shared/science/placement/unbound'
import type { PlacedQuantity } from '#shared/science/placement/types'

interface Row extends Residence { kd_per_s: number, loss_frac: number }
const { rows } = JSON.parse(readFileSync(new URL('../../fixtures/reference/placement/loss.json', import.meta.url), 'utf8')) as { rows: Row[] }
const HOUR_S = 3600
const DAY_S = 86400
const human = (share: number, days: number): Residence => ({ eliminationHalfLife_s: 1.6 * HOUR_S, slowShare_frac: share, slowHalfLife_s: days * DAY_S })

describe('fraction lost', () => {
  it('agrees with the matrix exponential of the whole system for 40 random sets [scipy.linalg.expm]', () => {
    expect(rows.length).toBe(40)
    // 1e-8: expm over 60 time constants of a stiff system
    for (const row of rows) expect(Math.abs(lossFraction(row.kd_per_s, row) / row.loss_frac - 1)).toBeLessThan(1e-8)
  })

  it('is k_d/(k_d + k_el) without a slow part [closed form]', () => {
    const kEl = Math.LN2 / (1.6 * HOUR_S)
    for (const kd of [0, 1e-12, 1e-6, kEl, 1]) expect(lossFraction(kd, human(0, 30))).toBeCloseTo(kd / (kd + kEl), 15)
  })

  it('is about tripled for an inert agent by 0.5 % of the dose at 30 days and about thirtyfold at one year [methods, tested figure]', () => {
    const times = (days: number): number => lossFraction(1e-14, human(0.005, days)) / lossFraction(1e-14, human(0, days))
    expect(times(30)).toBeCloseTo(3.26, 2)
    expect(times(365)).toBeCloseTo(28.5, 1)
    // the closed form of the limit: 1 + f/(1 − f) · t½,slow/t½,el
    expect(times(30)).toBeCloseTo(1 + 0.005 / 0.995 * (30 * 24 / 1.6), 6)
  })

  it('runs to 1 when dissociation is fast or elimination is slow [limits], to 0 when nothing dissociates', () => {
    expect(lossFraction(Infinity, human(0.005, 30))).toBe(1)
    expect(lossFraction(1e6, human(0.005, 30))).toBeCloseTo(1, 9)
    expect(lossFraction(1e-9, { ...human(0.005, 30), eliminationHalfLife_s: 1e20 })).toBeCloseTo(1, 9)
    expect(lossFraction(0, human(0.005, 30))).toBe(0)
  })

  it('rises with the rate, with the slow share and with its half-life, and stays between 0 and 1 [property]', () => {
    const rate = fc.double({ min: -14, max: 0, noNaN: true }).map(x => 10 ** x)
    const share = fc.double({ min: 0, max: 0.4, noNaN: true })
    const days = fc.double({ min: 0.1, max: 1000, noNaN: true })
    fc.assert(fc.property(rate, share, days, fc.double({ min: 1.01, max: 10, noNaN: true }), (kd, f, d, more) => {
      const base = lossFraction(kd, human(f, d))
      const tiny = 1 + 1e-12
      return base >= 0 && base <= 1 && lossFraction(kd * more, human(f, d)) * tiny >= base
        && lossFraction(kd, human(f + 0.01, d)) * tiny >= base && lossFraction(kd, human(f, d * more)) * tiny >= base
    }), { seed: 17, numRuns: 500 })
  })

  it('has the slope that differences give [central differences]', () => {
    for (const kd of [1e-10, 1e-6, 1e-4, 1e-2]) {
      const r = human(0.02, 10)
      const h = 1e-5
      const slope = (Math.log(lossFraction(kd * (1 + h), r)) - Math.log(lossFraction(kd * (1 - h), r))) / (2 * h)
      expect(lossSlope(kd, r)).toBeCloseTo(slope, 6)
    }
  })

  it('carries an interval end by end and a bound as a bound', () => {
    const answer = lossOf({ value: 1e-7, kind: '=', se: 1e-8, interval: [8e-8, 1.2e-7] }, human(0.005, 30))
    expect(answer.interval).toEqual([lossFraction(8e-8, human(0.005, 30)), lossFraction(1.2e-7, human(0.005, 30))])
    expect(answer.se! / answer.value).toBeCloseTo(0.1 * lossSlope(1e-7, human(0.005, 30)), 12)
    expect(lossOf({ value: 1e-7, kind: '<', se: null, interval: null }, human(0.005, 30))).toMatchObject({ kind: '<', se: null, interval: null })
  })

  it('is NaN outside its domain, never repaired', () => {
    expect(lossFraction(-1, human(0, 30))).toBeNaN()
    expect(lossFraction(NaN, human(0, 30))).toBeNaN()
    expect(lossFraction(1, human(1, 30))).toBeNaN()
    expect(lossFraction(1, human(-0.1, 30))).toBeNaN()
    expect(lossFraction(1, { ...human(0, 30), eliminationHalfLife_s: 0 })).toBeNaN()
  })
})

describe('unbound metal', () => {
  const quantity = (value: number, kind: PlacedQuantity['kind'] = '=', se: number | null = null): PlacedQuantity =>
    ({ value, kind, se, interval: null, unit: '', evidenceIds: ['x'], label: '', carried: false })

  it('is f + (1 − f)·loss [definition]', () => {
    expect(unboundFraction(0, 0.25)).toBe(0.25)
    expect(unboundFraction(0.5, 0.5)).toBe(0.75)
    expect(unboundTotal(quantity(0.1), quantity(0.2))!.value).toBeCloseTo(0.28, 15)
  })

  it('is "at least the loss" while free metal was not measured, and unknown where the loss is only "at most"', () => {
    expect(unboundTotal(quantity(1e-4), null)).toMatchObject({ value: 1e-4, kind: '>' })
    expect(unboundTotal(quantity(1e-4, '<'), null)).toBeNull()
    expect(unboundTotal(null, quantity(1e-4))).toBeNull()
  })

  it('is a bound once a detection limit exceeds what is known exactly, and a value while it does not', () => {
    expect(unboundTotal(quantity(1e-5, '=', 1e-6), quantity(2e-4, '<'))!.kind).toBe('<')
    expect(unboundTotal(quantity(1e-3, '=', 1e-4), quantity(2e-5, '<'))).toMatchObject({ kind: '=' })
    expect(unboundTotal(quantity(1e-5, '<'), quantity(2e-4, '<'))!.value).toBeCloseTo(2.1e-4, 8)
  })

  it('gives 0.05 µM for 0.25 mM and 0.02 %, and 0.0125 µmol/kg in 0.25 L/kg [closed form]', () => {
    const as = { factor: 1000, unit: 'µM', label: '' }
    expect(timesConcentration(quantity(2e-4), quantity(0.25), as)!.value).toBeCloseTo(0.05, 14)
    expect(timesConcentration(quantity(2e-4), quantity(0.25), { ...as, factor: 250 })!.value).toBeCloseTo(0.0125, 14)
    expect(timesConcentration(quantity(2e-4, '<'), quantity(0.25, '>'), as)).toBeNull()
    expect(timesConcentration(quantity(2e-4, '=', 2e-5), quantity(0.25, '=', 0.025), as)!.se).toBeCloseTo(0.05 * Math.SQRT2 * 0.1, 12)
  })
})

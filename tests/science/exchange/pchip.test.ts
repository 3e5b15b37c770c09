import { describe, expect, it } from 'vitest'
import reference from '../../../fixtures/reference/exchange/processing.json'
import { createPchip } from '../../../shared/science/exchange/pchip'

describe('monotone cubic interpolation', () => {
  it('gives value, slope and integral of scipy to 1e-12 of the largest ordinate, 30 seeded sets [fixtures/reference/exchange/processing.py]', () => {
    expect(reference.pchip.length).toBe(30)
    for (const { x, y, at, value, slope, ends, integral } of reference.pchip) {
      const pchip = createPchip(x, y)
      const size = Math.max(...y.map(Math.abs), 1)
      const steepest = Math.max(...slope.map(Math.abs), size)
      at.forEach((point, i) => {
        expect(Math.abs(pchip.at(point) - value[i]!) / size).toBeLessThan(1e-12)
        // at a node both pieces have the same slope, each with its own rounding
        expect(Math.abs(pchip.slopeAt(point) - slope[i]!) / steepest).toBeLessThan(1e-11)
      })
      const whole = pchip.integral(ends[0]!, ends[1]!)
      expect(Math.abs(whole - integral) / (size * (x.at(-1)! - x[0]!))).toBeLessThan(1e-12)
      expect(pchip.integral(ends[1]!, ends[0]!)).toBe(-whole)
    }
  })

  it('never leaves the span of the two neighbouring points [Fritsch & Carlson 1980]', () => {
    for (const { x, y } of reference.pchip) {
      const pchip = createPchip(x, y)
      for (let k = 0; k + 1 < x.length; k++) {
        for (let s = 0; s <= 20; s++) {
          const value = pchip.at(x[k]! + (s / 20) * (x[k + 1]! - x[k]!) * (1 - 1e-15))
          const slack = 1e-12 * Math.max(...y.map(Math.abs))
          expect(value).toBeGreaterThanOrEqual(Math.min(y[k]!, y[k + 1]!) - slack)
          expect(value).toBeLessThanOrEqual(Math.max(y[k]!, y[k + 1]!) + slack)
        }
      }
    }
  })

  it('does not extrapolate', () => {
    const pchip = createPchip([0, 1, 2], [0, 1, 4])
    expect(pchip.at(-1e-9)).toBeNaN()
    expect(pchip.at(2 + 1e-9)).toBeNaN()
    expect(pchip.at(NaN)).toBeNaN()
    expect(pchip.integral(0, 3)).toBeNaN()
  })

  it('refuses abscissae that do not rise and lists of unequal length', () => {
    expect(() => createPchip([0, 0, 1], [1, 2, 3])).toThrow('rising')
    expect(() => createPchip([0, 1], [1])).toThrow('a value for each')
  })
})

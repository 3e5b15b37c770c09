import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { columnDecimals, decimalsForError, formatBytes, formatCelsius, formatCount, formatDuration, formatFixed, formatNumber, formatPower, isLopsided, readNumber, writeValue } from '#shared/format'
import { parseNotation, plainNotation } from '#shared/notation'
import { writeAge, writeDay, writeMoment } from '#shared/times'

const THIN = '\u2009'
const NBSP = '\u00A0'

describe('numbers as people read them', () => {
  it('rounds a value to two significant digits of its error [GUM 7.2.6]', () => {
    expect(writeValue(4.2031, 0.0312)).toEqual({ value: '4.203', plusMinus: '0.031', interval: null, power: null })
    expect(writeValue(1234.6, 230)).toMatchObject({ value: '1230', plusMinus: '230' })
    expect(writeValue(5.31, 0.0996)).toMatchObject({ value: '5.31', plusMinus: '0.10' })
  })
  it('writes value and error over the same power of ten [look: 2.1 ± 0.8 × 10^−6]', () => {
    expect(writeValue(2.13e-6, 0.8e-6)).toEqual({ value: '2.13', plusMinus: '0.80', interval: null, power: -6 })
  })
  it('takes the digits of a lopsided interval where there is no standard error', () => {
    expect(writeValue(87.3, null, { low: 56.2, high: 140.1 })).toMatchObject({ value: '87', plusMinus: null, interval: '56 to 140' })
  })
  it('never lets a value that is not finite onto a screen', () => {
    for (const bad of [Number.NaN, Infinity, -Infinity]) {
      expect(writeValue(bad, 1).value).toBe('not measured')
      expect(formatNumber(bad)).toBe('not measured')
      expect(formatFixed(bad, 2)).toBe('not measured')
    }
    expect(formatNumber(null)).toBe('not measured')
    expect(formatNumber(0)).toBe('0')
  })
  it('claims no zeros that nobody measured', () => {
    expect([0.02, 24.1, 3, 0.5, 2e-6, 123_456].map(value => formatNumber(value))).toEqual(['0.02', '24.1', '3', '0.5', `2${NBSP}×${NBSP}10^{−6}`, `123${THIN}456`])
  })
  it('groups from five digits on with a thin space, and uses a true minus', () => {
    expect([1234, 12_345, 1_234_567].map(formatCount)).toEqual(['1234', `12${THIN}345`, `1${THIN}234${THIN}567`])
    expect(formatFixed(-1.25, 2)).toBe('−1.25')
    expect(formatFixed(-0.0001, 2)).toBe('0.00')
    expect(formatPower(-3.4e-7)).toBe(`−3.4${NBSP}×${NBSP}10^{−7}`)
    expect(formatPower(1e-6, 1)).toBe('10^{−6}')
  })
  it('gives a column one count of decimals, by half of its errors and enough for the finest to show', () => {
    expect(columnDecimals([{ value: 15.7, se: 0.3 }, { value: 5.31, se: 0.061 }, { value: 2.78, se: 0.2 }])).toBe(2)
    expect(columnDecimals([{ value: 5.3, se: 0.0012 }, { value: 5.3, se: 1.2 }, { value: 4, se: 1.1 }])).toBe(3)
    expect(columnDecimals([{ value: null, se: null }])).toBe(0)
  })
  it('shows kelvin as °C, seconds on the scale that people use, bytes in powers of 1000', () => {
    expect(formatCelsius(310.15)).toBe(`37.0${NBSP}°C`)
    expect([0.562, 3.23, 150, 8000, 6e5, 87 * 31_557_600, 2e-5].map(value => formatDuration(value))).toEqual(
      ['562 ms', '3.23 s', '2.5 min', '2.22 h', '6.94 d', '87 y', '20 µs'].map(text => text.replace(' ', NBSP)))
    expect(formatCelsius(null)).toBe('not measured')
    expect([12, 18_400, 20e6].map(formatBytes)).toEqual([`12${NBSP}bytes`, `18.4${NBSP}kB`, `20${NBSP}MB`])
  })
  it('tells a lopsided interval from an even one at a fifth', () => {
    expect(isLopsided(87, { low: 56, high: 140 })).toBe(true)
    expect(isLopsided(5, { low: 4, high: 6.1 })).toBe(false)
    expect(isLopsided(5, null)).toBe(false)
  })
  it('shows every error with one or two digits, whatever its size', () => {
    fc.assert(fc.property(fc.double({ min: 1e-9, max: 1e6, noNaN: true }), (se) => {
      const shown = Number((Math.round(se * 10 ** decimalsForError(se)) / 10 ** decimalsForError(se)).toPrecision(3))
      expect(Math.abs(shown - se) / se).toBeLessThan(0.0501)
    }), { seed: 7, numRuns: 500 })
  })
})

describe('numbers as people type them', () => {
  it('reads decimal point, decimal comma, spaced groups, a true minus and powers', () => {
    expect(['7.4', '7,4', '12 345', '−3', '1e-6', '2.1 × 10^-6', '2,1 × 10^{−6}', '.5', '5.'].map(readNumber)).toEqual([7.4, 7.4, 12_345, -3, 1e-6, 2.1e-6, 2.1e-6, 0.5, 5])
  })
  it('refuses what cannot be read one way only', () => {
    expect(['', '8O4', '1,234.5', '1.2.3', '1,2,3', '--3', '1e', 'NaN', 'Infinity', '0x10', '1e999'].map(readNumber)).toEqual(Array.from({ length: 11 }, () => null))
  })
})

describe('notation', () => {
  it('raises and lowers digits that the fonts do not have', () => {
    expect(parseNotation('r_1, mM⁻¹ s^-1')).toEqual([
      { text: 'r', at: 'base' }, { text: '1', at: 'sub' }, { text: ', mM', at: 'base' }, { text: '−1', at: 'sup' }, { text: ' s', at: 'base' }, { text: '−1', at: 'sup' },
    ])
    expect(parseNotation('t_{1/2} H₂O')).toEqual([{ text: 't', at: 'base' }, { text: '1/2', at: 'sub' }, { text: ' H', at: 'base' }, { text: '2', at: 'sub' }, { text: 'O', at: 'base' }])
  })
  it('leaves file names with underscores alone', () => {
    expect(parseNotation('SK-07_L2_IR.csv')).toEqual([{ text: 'SK-07_L2_IR.csv', at: 'base' }])
  })
  it('says bounds in words and leaves no sign without a glyph', () => {
    expect(plainNotation('≤ 5 → 6, 10⁻⁶')).toBe('at most 5 to 6, 10^−6')
    fc.assert(fc.property(fc.string({ unit: fc.constantFrom('a', '⁻', '⁰', '⁴', '₁', '≤', '→', '^', '{', '}', '_', '2') }), (text) => {
      expect(parseNotation(text).map(part => part.text).join('')).not.toMatch(/[⁻⁰⁴₁≤→]/)
    }), { seed: 11 })
  })
})

describe('times in words', () => {
  const now_ms = Date.parse('2026-12-01T09:00:00Z')
  const style = { now_ms, timeZone: 'UTC' }
  const moment = (iso: string) => writeMoment(Date.parse(iso), style)
  it('counts by the calendar, not by 24 hours', () => {
    expect(moment('2026-12-01T00:01:00Z')).toBe('today, 00:01')
    expect(moment('2026-11-30T23:59:00Z')).toBe('yesterday, 23:59')
    expect(moment('2026-11-27T11:05:00Z')).toBe('Friday, 11:05')
    expect(moment('2026-11-18T15:02:00Z')).toBe('18 Nov, 15:02')
    expect(moment('2025-11-18T15:02:00Z')).toBe('18 Nov 2025, 15:02')
    expect(moment('2026-12-02T15:02:00Z')).toBe('2 Dec, 15:02')
  })
  it('moves the day with the time zone', () => {
    expect(writeDay(Date.parse('2026-11-18T23:30:00Z'), { now_ms, timeZone: 'Europe/Athens' })).toBe('19 Nov')
  })
  it('shortens ages for a queue', () => {
    expect([30e3, 3 * 60e3, 20 * 3600e3, 50 * 3600e3].map(age => writeAge(now_ms - age, now_ms))).toEqual(['now', '3 min', '20 h', '2 d'])
  })
})

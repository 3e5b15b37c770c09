import { describe, expect, it } from 'vitest'
import { UNITS, celsiusToKelvin, fromStored, msToS, parseUnit, protonMHzToTesla, storedUnit, toStored, unitOf, type Dimension } from '../../shared/science/units'

const read = (text: string, dimension: Dimension) => {
  const parsed = parseUnit(text, dimension)
  return parsed.ok ? parsed.unit.symbol : `refused: ${parsed.accepted.join(', ')}`
}

describe('units', () => {
  it('converts by exact factors: 12 ms is the double 0.012 [IEEE 754]', () => {
    expect(msToS(12)).toBe(0.012)
    for (const ms of [1, 3, 7, 35, 120, 1100, 2300]) expect(toStored(ms, unitOf('ms', 'time'))).toBe(Number(`${ms}e-3`))
    expect(toStored(250, unitOf('µM', 'concentration'))).toBe(0.25)
  })
  it('knows fixed points: 25 °C is 298.15 K, 1 h is 3600 s, 63.87 MHz is 1.500 T [definition; CODATA 2018]', () => {
    expect(celsiusToKelvin(25)).toBe(298.15)
    expect(toStored(1, unitOf('h', 'time'))).toBe(3600)
    expect(protonMHzToTesla(63.87)).toBeCloseTo(1.5, 3)
    expect(toStored(180, unitOf('°', 'angle'))).toBe(Math.PI)
  })
  it('goes back and forth within rounding for every unit [property]', () => {
    for (const unit of Object.values(UNITS).flat()) {
      for (const value of [0, 1, -2.5, 37, 1e-3]) {
        expect(Math.abs(fromStored(toStored(value, unit), unit) - value), unit.symbol).toBeLessThanOrEqual(1e-12 * Math.max(1, Math.abs(toStored(value, unit))))
      }
    }
  })
  it('reads what people write, and keeps mM apart from MM and M', () => {
    expect(read(' ms ', 'time')).toBe('ms')
    expect(read('Seconds', 'time')).toBe('s')
    expect(read('\u03BCM', 'concentration')).toBe('µM')
    expect(read('mmol·L⁻¹', 'concentration')).toBe('mM')
    expect(read('mM\u207B\u00B9 s\u207B\u00B9', 'relaxivity')).toBe('mM^-1 s^-1')
    expect(read('L mmol-1 s-1', 'relaxivity')).toBe('mM^-1 s^-1')
    expect(read('s\u22121', 'rate')).toBe('s^-1')
    expect(read('MM', 'concentration')).toContain('refused')
    expect(read('M', 'concentration')).toBe('M')
  })
  it('refuses an unknown unit and lists what is accepted', () => {
    expect(parseUnit('fortnight', 'time')).toEqual({
      ok: false, reason: 'unknownUnit', message: '\'fortnight\' is not a unit of time.', accepted: ['s', 'ms', 'µs', 'ns', 'min', 'h', 'd'],
    })
    expect(() => unitOf('fortnight', 'time')).toThrow('no fortnight')
  })
  it('has no spelling that means two units of one dimension, and stores the first', () => {
    for (const [dimension, units] of Object.entries(UNITS)) {
      const spellings = units.flatMap(unit => [unit.symbol, ...unit.spellings])
      expect(new Set(spellings).size, dimension).toBe(spellings.length)
      expect(storedUnit(dimension as Dimension).toSi(3)).toBe(3)
    }
  })
})

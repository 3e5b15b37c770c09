import { describe, expect, it } from 'vitest'
import { bondLines } from '../../shared/drawing/bondLines'
import { conditionWords } from '../../shared/evidence/conditionWords'
import { asDuration, asPercent } from '../../shared/evidence/display'
import type { Quantity } from '../../shared/evidence/quantity'
import { unitOnOneLine } from '../../shared/evidence/records/unitOnOneLine'
import type { HalfLifeDto } from '../../shared/schemas/stability'
import type { StructureDrawing } from '../../shared/schemas/structure'
import { halfLifeLine } from '../../shared/stability/halfLifeLine'

const quantity = (value: number, more: Partial<Quantity> = {}): Quantity => ({ value, kind: '=', se: null, interval: null, unit: 's', evidenceId: null, ...more })

describe('numbers on the registry\'s screens', () => {
  it.each([[31_557_600 * 87, 87, 'y'], [200_000, 200_000 / 86_400, 'd'], [90 * 3600, 90 / 24, 'd'], [7200, 2, 'h'], [90, 90, 's'], [0.5, 0.5, 's']])('writes %f s in the unit people use [closed form]', (seconds, value, unit) => {
    const shown = asDuration(quantity(seconds, { se: seconds / 10, interval: [seconds / 2, seconds * 2], kind: '=' }))
    expect([shown.value, shown.unit, shown.se, shown.interval]).toEqual([expect.closeTo(value, 9), unit, expect.closeTo(value / 10, 9), [expect.closeTo(value / 2, 9), expect.closeTo(value * 2, 9)]])
  })
  it('keeps a bound a bound in per cent', () => {
    expect(asPercent(quantity(2e-4, { kind: '<', unit: '' }))).toMatchObject({ value: expect.closeTo(0.02, 12) as number, kind: '<', unit: '%' })
  })
  it.each([['M^-1 s^-1', '1/(M s)'], ['M^-2 s^-1', '1/(M² s)'], ['s^-1', '1/s'], ['kJ/mol', 'kJ/mol'], ['', '']])('writes the unit %s on one line', (symbol, words) => {
    expect(unitOnOneLine(symbol)).toBe(words)
  })
  it('writes the conditions that are there and nothing for those that are not', () => {
    const words = conditionWords({ quantity: 'pM', conditions: { temperature_K: 298.15, pH: 7.4, ionicStrength_M: 0.1, medium: 'NMe4Cl', metal_M: 1e-6, ligand_M: 1e-5 }, detail: {} })
    expect(words.replaceAll('\u00A0', ' ')).toBe('25 °C, pH 7.4, 0.1 M NMe_4Cl, 1 µM metal, 10 µM ligand')
    expect(conditionWords({ quantity: 'r1_per_mM_s', conditions: {}, detail: {} })).toBe('')
  })
})

describe('the line of half-lives', () => {
  const row = (code: string, seconds: number, kind: Quantity['kind'] = '=') => ({ id: code, code, halfLife: { value: quantity(seconds, { kind }), state: 'signed', note: null } }) as unknown as HalfLifeDto

  it('orders agents from short to long', () => {
    const { marks } = halfLifeLine([row('B', 1e8), row('A', 1e4)], 5760)
    expect(marks.map(mark => mark.agent.code)).toEqual(['A', 'B'])
    expect(marks[0]!.at).toBeLessThan(marks[1]!.at)
  })
  it('is logarithmic: equal factors are equal distances [closed form]', () => {
    const [a, b, c] = halfLifeLine([row('A', 1e3), row('B', 1e5), row('C', 1e7)], 1e4).marks.map(mark => mark.at) as [number, number, number]
    expect(b - a).toBeCloseTo(c - b, 9)
  })
  it('puts labels that would cover each other into different rows', () => {
    const { marks } = halfLifeLine([row('A', 1e8), row('B', 1.05e8), row('C', 1.1e8)], 10)
    expect(new Set(marks.map(mark => mark.row)).size).toBe(3)
  })
  it('points where the truth of a bound lies', () => {
    expect(halfLifeLine([row('A', 1e8, '>'), row('B', 1e4, '<'), row('C', 1e5)], 10).marks.map(mark => mark.arrow)).toEqual(['left', null, 'right'])
  })
})

describe('the lines of a structure', () => {
  const atom = (x: number, y: number, isShown = false) => ({ x, y, symbol: isShown ? 'O' : 'C', hydrogens: 0, charge: 0, isShown, hydrogensLeft: false })
  const drawing = (order: number, inner: 'left' | 'right' | 'middle', shown = false): StructureDrawing => ({
    width: 3, height: 3, atoms: [atom(1, 1), atom(2, 1, shown)], bonds: [{ from: 0, to: 1, order, wedge: 'none', inner }], metalAt: null,
  })
  it('are as many as the bond has orders', () => {
    expect([1, 2, 3].map(order => bondLines(drawing(order, 'middle')).lines.length)).toEqual([1, 2, 3])
  })
  it('stop short of a letter', () => {
    expect(bondLines(drawing(1, 'middle', true)).lines[0]).toEqual({ from: { x: 1, y: 1 }, to: { x: expect.closeTo(1.72, 9) as number, y: 1 } })
  })
  it('put the second line of a double bond on the side of its neighbours', () => {
    const [, inside] = bondLines(drawing(2, 'right')).lines
    expect(inside!.from.y).toBeGreaterThan(1)
  })
})

import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { dashOf, layoutFigure, offScale, twinTable } from '#shared/figure/layout'
import { domainOf, labelledTicks, linearTicks, logTicks, makeScale } from '#shared/figure/scale'
import type { FigureSpec } from '#shared/schemas/figure'

const line = (name: string, token: 's1' | 's2' | 's4', y: number) => ({ type: 'line' as const, name, token, points: [{ x: 0, y: 0 }, { x: 3, y }] })
const figure: FigureSpec = {
  id: 'slope', title: 'Slope', text: 'R_1 rises.', x: { label: 'concentration', unit: 'mM', scale: 'linear' }, y: { label: 'R_1', unit: 's^-1', scale: 'linear' },
  layers: [line('L1', 's1', 10), line('L2', 's2', 10.2), { type: 'points', name: 'tubes', token: 's1', points: [{ x: 1, y: 3 }, { x: 2, y: 7 }] }],
}

describe('scales', () => {
  it('runs from one end of the range to the other, either way [closed form]', () => {
    const scale = makeScale('log', [1, 100], [200, 0])
    expect([1, 10, 100].map(scale.toPixel)).toEqual([200, 100, 0])
    expect([0, -1, 0.5, 1, 101].map(scale.contains)).toEqual([false, false, false, true, false])
  })
  it('ticks stand at 1, 2, 2.5 or 5 times a power of ten and inside the domain', () => {
    fc.assert(fc.property(fc.double({ min: -1e6, max: 1e6, noNaN: true }), fc.double({ min: 1e-6, max: 1e6, noNaN: true }), (low, span) => {
      fc.pre(span / Math.max(1, Math.abs(low)) > 1e-6)
      const ticks = linearTicks([low, low + span], 5)
      expect(ticks.length).toBeGreaterThan(0)
      expect(ticks.length).toBeLessThanOrEqual(6)
      for (const tick of ticks) expect(tick >= low - 1e-6 * span && tick <= low + span * (1 + 1e-6)).toBe(true)
    }), { seed: 3 })
  })
  it('shows decades, 1-2-5 where they are few, every other one where they are many', () => {
    expect(logTicks([40, 6000], 7)).toEqual([50, 100, 200, 500, 1000, 2000, 5000])
    expect(logTicks([1e-8, 1e-4], 5)).toEqual([1e-8, 1e-7, 1e-6, 1e-5, 1e-4])
    expect(logTicks([1e-8, 1], 4)).toEqual([1e-8, 1e-6, 1e-4, 1e-2, 1])
    expect(logTicks([0, 1], 4)).toEqual([])
  })
  it('labels with equal decimals, and with powers where figures would be long', () => {
    expect(labelledTicks(makeScale('linear', [0, 1], [0, 1]), 4).map(tick => tick.label)).toEqual(['0.00', '0.25', '0.50', '0.75', '1.00'])
    expect(labelledTicks(makeScale('log', [1e-6, 1e-3], [0, 1]), 5).map(tick => tick.label)).toEqual(['10^{-6}', '10^{-5}', '10^{-4}', '10^{-3}'])
    expect(labelledTicks(makeScale('linear', [0, 2e-6], [0, 1]), 2).map(tick => tick.label)).toEqual(['0', '1·10^{-6}', '2·10^{-6}'])
  })
  it('begins at zero when the values do nearly, and never where they do not', () => {
    expect(domainOf([0.3, 13.1], 'linear', true)).toEqual([0, 15])
    expect(domainOf([100, 104], 'linear', true)[0]).toBeGreaterThan(98)
    expect(domainOf([], 'linear', true)).toEqual([0, 1])
    expect(domainOf([5, 5], 'linear', true)).toEqual([0, 6.25])
  })
  it('holds every value it was made from', () => {
    fc.assert(fc.property(fc.array(fc.double({ min: -1e5, max: 1e5, noNaN: true }), { minLength: 1 }), fc.boolean(), (values, rounded) => {
      const [low, high] = domainOf(values, 'linear', rounded)
      const slack = 1e-6 * (high - low)
      expect(high).toBeGreaterThan(low)
      for (const value of values) expect(value >= low - slack && value <= high + slack).toBe(true)
    }), { seed: 5 })
  })
})

describe('where things stand in a figure', () => {
  it('sets labels at line ends a line apart', () => {
    const { endLabels } = layoutFigure(figure, 600, 280)
    expect(endLabels.map(label => label.text).sort()).toEqual(['L1', 'L2'])
    expect(Math.abs((endLabels[1]?.y ?? 0) - (endLabels[0]?.y ?? 0))).toBeGreaterThanOrEqual(14)
  })
  it('says names in a key where the figure is narrow', () => {
    const narrow = layoutFigure(figure, 340, 280)
    expect(narrow.endLabels).toEqual([])
    expect(narrow.key.map(entry => entry.name)).toEqual(['L1', 'L2', 'tubes'])
    const points = (name: string, how: object) => ({ type: 'points' as const, name, token: 's1' as const, points: [{ x: 1, y: 3 }], ...how })
    const three = layoutFigure({ ...figure, layers: [points('filled', {}), points('open', { open: true }), points('of other origin', { square: true })] }, 300, 280)
    expect(three.key.map(entry => entry.shape)).toEqual(['points', 'open', 'square'])
  })
  it('runs offsets from right to left when asked', () => {
    const { x } = layoutFigure({ ...figure, x: { ...figure.x, reversed: true } }, 600, 280)
    expect(x.toPixel(0)).toBeGreaterThan(x.toPixel(3))
  })
  it('names points beyond a fixed axis and drops none silently', () => {
    const layout = layoutFigure({ ...figure, y: { ...figure.y, domain: [0, 5] } }, 600, 280)
    expect(offScale([{ x: 1, y: 3 }, { x: 2, y: 7 }], layout)).toEqual([{ x: 2, y: 7 }])
  })
  it('keeps plot and strip apart and inside the box', () => {
    const layout = layoutFigure({ ...figure, strip: { label: 'residual', points: [{ x: 1, y: 1 }] } }, 600, 360)
    expect(layout.strip?.top).toBeGreaterThan(layout.bottom)
    expect(layout.strip?.bottom).toBeLessThan(360)
  })
  it('differs in dash from the fourth series on', () => {
    expect([dashOf('s1'), dashOf('s3'), dashOf('s4'), dashOf('s5'), dashOf('s6')]).toEqual(['solid', 'solid', 'dashed', 'dotted', 'dashdot'])
  })
  it('has a table twin with every point, its own where it brings one', () => {
    expect(twinTable(figure).rows).toHaveLength(6)
    expect(twinTable({ ...figure, table: { columns: [], rows: [] } }).rows).toEqual([])
  })
})

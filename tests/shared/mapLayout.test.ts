import { describe, expect, it } from 'vitest'
import { decadeTicks, placeOf, pixelOf, powerAt, stepTicks, type Plane } from '../../shared/map/axes'
import { frontPieces } from '../../shared/map/front'
import { ellipsePath, isInside, overlaps, type Box, type Point } from '../../shared/map/geometry'
import { diagonal, grainOf, metalPowerAt, slideRule } from '../../shared/map/grain'
import { placeLabels, spread } from '../../shared/map/labels'
import { nearestMark } from '../../shared/map/nearest'
import { chiSquareShare, makeRandom } from '../support/mapRandom'

const plane: Plane = { x: { low: -8, high: 0, from_px: 60, to_px: 860 }, y: { low: -2, high: 1, from_px: 600, to_px: 60 } }
const area: Box = { x: 60, y: 60, w: 800, h: 540 }

describe('an axis of the map', () => {
  it('places a value and reads it back to a hundredth of a pixel [definition of a logarithmic scale]', () => {
    const random = makeRandom(11)
    for (let i = 0; i < 200; i++) {
      const power = -8 + 8 * random()
      expect(powerAt(plane.x, pixelOf(plane.x, power))).toBeCloseTo(power, 3)
    }
  })

  it('holds what lies beyond an end, zero included, at that end and says so', () => {
    expect(placeOf(plane.x, 0)).toEqual({ px: 60, beyond: 'low' })
    expect(placeOf(plane.x, 1e-12)).toEqual({ px: 60, beyond: 'low' })
    expect(placeOf(plane.y, 50)).toEqual({ px: 60, beyond: 'high' })
    expect(placeOf(plane.x, 1e-4)).toEqual({ px: 460, beyond: null })
  })

  it('thins ticks that would stand too close', () => {
    expect(decadeTicks(plane.x, 44)).toHaveLength(9)
    expect(decadeTicks(plane.x, 150).map(tick => tick.power)).toEqual([-8, -6, -4, -2, 0])
    expect(stepTicks(plane.y, 18).map(tick => tick.value)).toEqual([0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1, 2, 5, 10])
    expect(stepTicks(plane.y, 80).map(tick => tick.value)).toEqual([0.01, 0.1, 1, 10])
  })
})

describe('the grain', () => {
  it('has the same unbound metal all along a diagonal: loss times concentration [conc in mM, so 1 mM × 10^-6 = 1 nM]', () => {
    const [from, to] = diagonal(plane, -9)
    for (const share of [0, 0.25, 0.6, 1]) {
      const point: Point = [from[0] + share * (to[0] - from[0]), from[1] + share * (to[1] - from[1])]
      expect(metalPowerAt(plane, point)).toBeCloseTo(-9, 3)
    }
    expect(metalPowerAt(plane, [pixelOf(plane.x, -6), pixelOf(plane.y, 0)])).toBeCloseTo(-9, 3)
  })

  it('reads on the top edge what its diagonal means, with units up to the millimole', () => {
    const rule = slideRule(plane, 56)
    for (const tick of rule) expect(metalPowerAt(plane, [tick.px, plane.y.to_px])).toBeCloseTo(tick.power, 3)
    expect(rule.map(tick => tick.words.replace('\u00A0', ' '))).toEqual(['100 pM', '1 nM', '10 nM', '100 nM', '1 µM', '10 µM', '100 µM', '1 mM', '10 mM'])
  })

  it('darkens by one step for each decade from lower left to upper right', () => {
    const { bands } = grainOf(plane)
    expect(bands.map(band => band.power)).toEqual([...bands.map(band => band.power)].sort((a, b) => a - b))
    expect(bands.at(0)!.share).toBe(0)
    expect(bands.at(-1)!.share).toBe(1)
  })
})

describe('an ellipse', () => {
  it('holds 68 % of the log-normal that it stands for [chi-square with 2 degrees of freedom]', () => {
    expect(chiSquareShare({ semiMajor_decades: 0.4, semiMinor_decades: 0.15, angle_rad: 0.5, level: 0.68 }, makeRandom(5), 20000)).toBeCloseTo(0.68, 1)
  })

  it('is drawn about its centre, never narrower than the mark', () => {
    const path = ellipsePath({ centreLogLoss: -4, centreLogConc: 0, semiMajor_decades: 1e-4, semiMinor_decades: 1e-5, angle_rad: 0, level: 0.68 }, plane)
    const xs = [...path.matchAll(/[ML]([\d.]+) /g)].map(match => Number(match[1]))
    expect((Math.min(...xs) + Math.max(...xs)) / 2).toBeCloseTo(460, 0)
    expect(Math.max(...xs) - Math.min(...xs)).toBeGreaterThanOrEqual(17.9)
  })
})

describe('the front', () => {
  it('steps level and then down from agent to agent, solid only where it is certain, and runs on at both ends', () => {
    const pieces = frontPieces([{ point: [300, 200], solid: true }, { point: [100, 100], solid: true }, { point: [400, 300], solid: false }], { top: 60, right: 860 })
    expect(pieces.map(piece => piece.look)).toEqual(['runsOn', 'solid', 'solid', 'solid', 'unsure', 'runsOn'])
    for (const { from, to } of pieces) expect(from[0] === to[0] || from[1] === to[1]).toBe(true)
    expect(pieces[0]).toEqual({ from: [100, 60], to: [100, 100], look: 'runsOn' })
    expect(pieces.at(-1)).toEqual({ from: [400, 300], to: [860, 300], look: 'runsOn' })
  })

  it('is empty without agents', () => {
    expect(frontPieces([], { top: 0, right: 10 })).toEqual([])
  })
})

describe('labels', () => {
  it('never lie over a mark, the front, another label or the edge, in a hundred crowded planes', () => {
    for (let seed = 1; seed <= 100; seed++) {
      const random = makeRandom(seed)
      const wishes = Array.from({ length: 40 }, (_, at) => ({ id: `SK-${at}`, at: [60 + 800 * random(), 60 + 540 * random()] as const, w: 42 + 60 * random(), h: random() > 0.7 ? 29 : 15, rank: Math.floor(4 * random()) }))
      const obstacles: Box[] = [...wishes.map(({ at: [x, y] }) => ({ x: x - 10, y: y - 10, w: 20, h: 20 })), { x: 200, y: 300, w: 300, h: 3 }]
      const placed = [...placeLabels(wishes, obstacles, area).values()]
      for (const [at, { box }] of placed.entries()) {
        expect(isInside(box, area)).toBe(true)
        expect(obstacles.some(one => overlaps(one, box))).toBe(false)
        expect(placed.slice(at + 1).some(other => overlaps(other.box, box))).toBe(false)
      }
      expect(placed.length).toBeGreaterThan(20)
    }
  })

  it('are given to the first in rank where there is room for one only', () => {
    const wishes = [{ id: 'b', at: [40, 30] as const, w: 50, h: 15, rank: 2 }, { id: 'a', at: [40, 30] as const, w: 50, h: 15, rank: 1 }]
    expect([...placeLabels(wishes, [], { x: 40, y: 20, w: 66, h: 24 }).keys()]).toEqual(['a'])
  })
})

describe('names in a lane', () => {
  it('keep their gap and their order and stay within the lane', () => {
    const random = makeRandom(3)
    for (let i = 0; i < 100; i++) {
      const wanted = Array.from({ length: 8 }, () => 600 * random())
      const places = spread(wanted, 30, [60, 540])
      const sorted = [...places].sort((a, b) => a - b)
      for (let k = 1; k < sorted.length; k++) expect(sorted[k]! - sorted[k - 1]!).toBeGreaterThanOrEqual(30 - 1e-9)
      expect(sorted[0]).toBeGreaterThanOrEqual(60)
      expect(sorted.at(-1)).toBeLessThanOrEqual(540)
      for (let a = 0; a < wanted.length; a++) for (let b = 0; b < wanted.length; b++) if (wanted[a]! < wanted[b]!) expect(places[a]!).toBeLessThanOrEqual(places[b]!)
    }
    expect(spread([100, 300], 30, [60, 540])).toEqual([100, 300])
  })
})

describe('the arrow keys', () => {
  const marks = [{ id: 'here', at: [100, 100] }, { id: 'right', at: [200, 110] }, { id: 'above', at: [110, 20] }, { id: 'far', at: [150, 300] }].map(one => ({ ...one, at: one.at as unknown as Point }))

  it('go to the nearest mark that way, straight ahead before aside, and nowhere where there is none', () => {
    expect(nearestMark(marks, marks[0]!, 'ArrowRight')).toBe('right')
    expect(nearestMark(marks, marks[0]!, 'ArrowUp')).toBe('above')
    expect(nearestMark(marks, marks[0]!, 'ArrowDown')).toBe('far')
    expect(nearestMark(marks, marks[0]!, 'ArrowLeft')).toBeNull()
  })

  it('always go to a mark that lies that way', () => {
    const random = makeRandom(8)
    const many = Array.from({ length: 30 }, (_, at) => ({ id: String(at), at: [800 * random(), 600 * random()] as const }))
    for (const from of many) {
      const next = many.find(one => one.id === nearestMark(many, from, 'ArrowRight'))
      if (next) expect(next.at[0]).toBeGreaterThan(from.at[0])
      else expect(many.every(one => one.at[0] <= from.at[0])).toBe(true)
    }
  })
})

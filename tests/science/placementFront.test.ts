import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { chi2TwoQuantile, ellipseOf, logCovarianceOf } from '#shared/science/placement/ellipse'
import { findFront, pairsNotDistinguishable, rivalTable, type FrontPoint } from '#shared/science/placement/front'
import { createRandom } from '#shared/science/random'

const point = (id: string, loss_frac: number, conc_mM: number, more: Partial<FrontPoint> = {}): FrontPoint =>
  ({ id, loss_frac, conc_mM, worst: { loss_frac, conc_mM }, best: { loss_frac, conc_mM }, ...more })

const grid = fc.integer({ min: 1, max: 6 })
const points = fc.array(fc.record({ loss_frac: grid, conc_mM: grid }), { maxLength: 25 }).map(list => list.map((p, i) => point(`p${i}`, p.loss_frac, p.conc_mM)))

/** The definition itself, pair by pair. */
const beaten = (a: FrontPoint, all: readonly FrontPoint[]): boolean =>
  all.some(b => b.loss_frac <= a.loss_frac && b.conc_mM <= a.conc_mM && (b.loss_frac < a.loss_frac || b.conc_mM < a.conc_mM))

describe('front', () => {
  it('holds exactly the unbeaten, ties included [pairwise definition, on a coarse grid]', () => {
    fc.assert(fc.property(points, (list) => {
      expect(new Set(findFront(list).front)).toEqual(new Set(list.filter(p => !beaten(p, list)).map(p => p.id)))
    }), { seed: 23, numRuns: 500 })
  })

  it('does not depend on the order of the agents [property]', () => {
    fc.assert(fc.property(points, fc.integer({ min: 0, max: 24 }), (list, turn) => {
      const turned = [...list.slice(turn), ...list.slice(0, turn)].reverse()
      expect(findFront(turned).front).toEqual(findFront(list).front)
      expect([...findFront(turned).solid].sort()).toEqual([...findFront(list).solid].sort())
    }), { seed: 29 })
  })

  it('runs by rising loss and falling concentration [property]', () => {
    fc.assert(fc.property(points, (list) => {
      const byId = new Map(list.map(p => [p.id, p]))
      const front = findFront(list).front.map(id => byId.get(id)!)
      return front.every((p, i) => i === 0 || (p.loss_frac >= front[i - 1]!.loss_frac && p.conc_mM <= front[i - 1]!.conc_mM))
    }), { seed: 31 })
  })

  it('lets an agent that was beaten onto the front when the one that beat it is taken away', () => {
    expect(findFront([point('a', 1, 1), point('b', 2, 2)]).front).toEqual(['a'])
    expect(findFront([point('b', 2, 2)]).front).toEqual(['b'])
    expect(findFront([]).front).toEqual([])
  })

  it('is solid for an agent alone and for those whose upper ends stay unbeaten', () => {
    const wide = { worst: { loss_frac: 4, conc_mM: 1 } }
    expect(findFront([point('a', 1, 1, wide)]).solid).toEqual(new Set(['a']))
    const both = findFront([point('a', 1, 1, wide), point('b', 3, 0.9)])
    expect(both.front).toEqual(['a', 'b'])
    expect(both.solid).toEqual(new Set(['b']))
  })

  it('is not solid where a rival known only as "at most" could beat it', () => {
    const bound = point('b', 5, 1, { best: { loss_frac: 0, conc_mM: 1 } })
    const { front, solid } = findFront([point('a', 1, 2), bound, point('c', 0.5, 0.8)])
    expect(front).toEqual(['c'])
    expect(solid).toEqual(new Set(['c']))
    const other = findFront([point('a', 1, 2), bound])
    expect(other.front).toEqual(['a', 'b'])
    expect(other.solid).toEqual(new Set(['b']))
  })

  it('leaves one agent out of its own rivals', () => {
    const beats = rivalTable([point('a', 1, 1), point('b', 2, 2)])
    expect(beats({ id: 'a', loss_frac: 3, conc_mM: 3 })).toBe(true)
    expect(rivalTable([point('a', 1, 1)])({ id: 'a', loss_frac: 3, conc_mM: 3 })).toBe(false)
  })

  it('of 40 000 agents holds nobody whom another of it beats', () => {
    const random = createRandom('front')
    const many = Array.from({ length: 40_000 }, (_, i) => point(`p${i}`, random.uniform(), random.uniform()))
    const { front } = findFront(many)
    expect(front.length).toBeGreaterThan(3)
    const ordered = many.filter(one => front.includes(one.id)).sort((a, b) => a.loss_frac - b.loss_frac)
    ordered.slice(1).forEach((one, i) => expect(one.conc_mM).toBeLessThan(ordered[i]!.conc_mM))
  })
})

describe('pairs that cannot be told apart', () => {
  const spread = (id: string, lnLoss: number, lossSpread: number | null) => ({ id, lnLoss, lnConc: 0, lossSpread, concSpread: 0.1 })

  it('are those within 1.96 combined spreads on both axes [normal distribution]', () => {
    const pairs = pairsNotDistinguishable([spread('a', 0, 0.3), spread('b', 1.95 * 0.5, 0.4), spread('c', 9, 0.1)])
    expect(pairs.get('a')).toEqual(['b'])
    expect(pairs.get('b')).toEqual(['a'])
    expect(pairs.get('c')).toEqual([])
  })

  it('include every agent whose loss is only a bound, and none without errors unless equal', () => {
    expect(pairsNotDistinguishable([spread('a', 0, Infinity), spread('b', 20, 0.1)]).get('a')).toEqual(['b'])
    expect(pairsNotDistinguishable([spread('a', 0, null), spread('b', 0.01, null)]).get('a')).toEqual([])
  })
})

describe('ellipses', () => {
  it('use χ² with two degrees of freedom: 2.279 at 68 %, 5.991 at 95 % [tables]', () => {
    expect(chi2TwoQuantile(0.68)).toBeCloseTo(2.2789, 4)
    expect(chi2TwoQuantile(0.95)).toBeCloseTo(5.9915, 4)
  })

  it('have axes along the scales when the errors are independent and turn towards the diagonal when they are not [closed form]', () => {
    const centre = { loss_frac: 1e-3, conc_mM: 0.1 }
    const flat = ellipseOf(centre, { lossLoss: 0.04, concConc: 0.01, lossConc: 0 }, 0.95)
    expect(flat).toMatchObject({ centreLogLoss: -3, centreLogConc: -1, angle_rad: 0 })
    expect(flat.semiMajor_decades).toBeCloseTo(Math.sqrt(5.9915) * 0.2 / Math.LN10, 4)
    expect(flat.semiMinor_decades).toBeCloseTo(Math.sqrt(5.9915) * 0.1 / Math.LN10, 4)
    expect(ellipseOf(centre, { lossLoss: 0.01, concConc: 0.04, lossConc: 0 }, 0.95).angle_rad).toBeCloseTo(Math.PI / 2, 12)
    expect(ellipseOf(centre, { lossLoss: 0.02, concConc: 0.02, lossConc: 0.01 }, 0.68).angle_rad).toBeCloseTo(Math.PI / 4, 12)
    expect(ellipseOf(centre, { lossLoss: 0.02, concConc: 0.02, lossConc: 0.02 }, 0.68).semiMinor_decades).toBeCloseTo(0, 9)
  })

  it('hold 68 and 95 % of a correlated log-normal sample [seeded]', () => {
    const random = createRandom('ellipse')
    const n = 20_000
    const loss = new Float64Array(n)
    const conc = new Float64Array(n)
    for (let i = 0; i < n; i++) {
      const [a, b] = [random.normal(), random.normal()]
      loss[i] = 0.5 * a
      conc[i] = 0.1 * (0.6 * a + 0.8 * b)
    }
    const covariance = logCovarianceOf(loss, conc)
    for (const level of [0.68, 0.95] as const) {
      const e = ellipseOf({ loss_frac: 1, conc_mM: 1 }, covariance, level)
      let inside = 0
      for (let i = 0; i < n; i++) {
        const [x, y] = [loss[i]! / Math.LN10, conc[i]! / Math.LN10]
        const along = x * Math.cos(e.angle_rad) + y * Math.sin(e.angle_rad)
        const across = y * Math.cos(e.angle_rad) - x * Math.sin(e.angle_rad)
        if ((along / e.semiMajor_decades) ** 2 + (across / e.semiMinor_decades) ** 2 <= 1) inside++
      }
      // 0.012: four standard errors of the share at 20 000
      expect(Math.abs(inside / n - level)).toBeLessThan(0.012)
    }
  })
})

import { describe, expect, it } from 'vitest'
import reference from '../../fixtures/reference/exactMath/values.json'
import xoshiro from '../../fixtures/reference/exactMath/xoshiro.json'
import { exactExp, exactLog } from '../../shared/science/exactMath'
import { createRandom, createRandomFromState, deriveSeed } from '../../shared/science/random'
import { chi2UpperP, normalCdf } from '../../shared/science/statistics'

const view = new DataView(new ArrayBuffer(8))

/** Distance in units of the last place: the bit patterns of doubles of one sign are in order. */
function ulps(a: number, b: number): number {
  const order = (x: number) => {
    view.setFloat64(0, x)
    const bits = view.getBigInt64(0)
    return bits < 0n ? -(bits & 0x7FFFFFFFFFFFFFFFn) : bits
  }
  const gap = order(a) - order(b)
  return Number(gap < 0n ? -gap : gap)
}

describe('exp and log of our own', () => {
  it('exp is within 1 ulp of the correctly rounded value [mpmath, 40 digits]', () => {
    for (const [x, y] of reference.exp as [number, number][]) expect(ulps(exactExp(x), y), `exp(${x})`).toBeLessThanOrEqual(1)
  })
  it('log is within 1 ulp of the correctly rounded value, subnormals included [mpmath, 40 digits]', () => {
    for (const [x, y] of reference.log as [number, number][]) expect(ulps(exactLog(x), y), `log(${x})`).toBeLessThanOrEqual(1)
  })
  it('both are within 1 ulp of the engine on 20 000 seeded arguments [Math.exp, Math.log]', () => {
    const random = createRandom('ulps')
    for (let i = 0; i < 20_000; i++) {
      const x = 60 * (random.uniform() - 0.5)
      expect(ulps(exactExp(x), Math.exp(x))).toBeLessThanOrEqual(1)
      const y = Math.exp(x)
      expect(ulps(exactLog(y), Math.log(y))).toBeLessThanOrEqual(1)
    }
  })
  it('answers at the edges as IEEE 754 asks', () => {
    expect([exactExp(0), exactExp(710), exactExp(-746), exactExp(Infinity), exactExp(-Infinity)]).toEqual([1, Infinity, 0, Infinity, 0])
    expect([exactLog(1), exactLog(0), exactLog(Infinity)]).toEqual([0, -Infinity, Infinity])
    expect(exactExp(NaN)).toBeNaN()
    expect(exactLog(-1)).toBeNaN()
  })
})

describe('seeded streams', () => {
  it('follows the published generator from state 1, 2, 3, 4 [fixtures/reference/exactMath/xoshiro.json, whole-number arithmetic in another language]', () => {
    const { nextUint32 } = createRandomFromState([1, 2, 3, 4])
    expect(Array.from(xoshiro, () => nextUint32())).toEqual(xoshiro)
  })
  it('gives the same numbers for the same seed and others for another', () => {
    const draw = (seed: string | number) => Array.from({ length: 5 }, createRandom(seed).normal)
    expect(draw('map')).toEqual(draw('map'))
    expect(draw(1)).toEqual(draw('1'))
    expect(draw('map')).not.toEqual(draw('mbp'))
    expect(deriveSeed('a', 'bc')).not.toBe(deriveSeed('ab', 'c'))
    expect(deriveSeed(7, 'x')).toMatch(/^[0-9a-f]{32}$/)
  })
  it('draws normal deviates: mean, variance and 20 equal classes of 100 000 pass at p > 0.001 [χ²]', () => {
    const random = createRandom('normal')
    const counts = new Array<number>(20).fill(0)
    let sum = 0
    let squares = 0
    const n = 100_000
    for (let i = 0; i < n; i++) {
      const z = random.normal()
      sum += z
      squares += z * z
      counts[Math.floor(20 * normalCdf(z))]! += 1
    }
    expect(Math.abs(sum / n)).toBeLessThan(3.3 / Math.sqrt(n))
    expect(Math.abs(squares / n - 1)).toBeLessThan(3.3 * Math.sqrt(2 / n))
    const chi2 = counts.reduce((total, count) => total + (count - n / 20) ** 2 / (n / 20), 0)
    expect(chi2UpperP(chi2, 19)).toBeGreaterThan(0.001)
  })
  it('keeps uniform deviates in [0, 1) and streams of neighbouring seeds uncorrelated', () => {
    const a = createRandom(1)
    const b = createRandom(2)
    let product = 0
    const n = 20_000
    for (let i = 0; i < n; i++) {
      const u = a.uniform()
      expect(u).toBeGreaterThanOrEqual(0)
      expect(u).toBeLessThan(1)
      product += (u - 0.5) * (b.uniform() - 0.5)
    }
    // The correlation of two independent uniform samples has standard deviation 1/√n.
    expect(Math.abs((12 * product) / n)).toBeLessThan(4 / Math.sqrt(n))
  })
})

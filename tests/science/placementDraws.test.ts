import { createHash } from 'node:crypto'
import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { createPlacementCache } from '#shared/science/placement/cache'
import { drawAgent, sharedDraws, type AgentDraws } from '#shared/science/placement/drawAgent'
import { drawChances, DRAWS } from '#shared/science/placement/draws'
import { agentFacts } from '#shared/science/placement/facts'
import { lossFraction } from '#shared/science/placement/loss'
import { DEFAULT_PROFILE } from '#shared/science/placement/profile'
import { above, below, choleskyOf, correlate, logNormal, normals, quantileOf, splitLogNormal } from '#shared/science/placement/sampling'
import type { AgentEvidence, EvidenceItem } from '#shared/science/placement/types'
import { agent, item, rateItem, relaxivity } from './placement/agents'

const { sha256 } = JSON.parse(readFileSync(new URL('../../fixtures/reference/placement/draws.json', import.meta.url), 'utf8')) as { sha256: string }
const signed = { includeUnsigned: false }
const withId = (id: string, one: EvidenceItem): EvidenceItem => ({ ...one, id })

/** A programme whose ids do not depend on what other tests made. */
const programme: AgentEvidence[] = [
  agent('ring', [withId('r1', relaxivity(4, { covarianceGroup: { id: 'stock', scaleFraction: 0.015 } })), withId('r2', rateItem('k0_per_s', 2e-10, { kind: '<', se: null })), withId('r3', rateItem('k1_per_M_s', 2e-3)), withId('r4', item('freeMetal_frac', 1e-5, { kind: '<' }))]),
  agent('open', [withId('o1', relaxivity(4.5, { covarianceGroup: { id: 'stock', scaleFraction: 0.015 } })), withId('o2', rateItem('kZn_per_M_s', 0.05)), withId('o3', rateItem('kCu_per_M_s', 0.9)), withId('o4', item('freeMetal_frac', 1e-4, { se: 2e-5 }))]),
  agent('mid', [withId('m1', relaxivity(5)), withId('m2', rateItem('k0_per_s', 3e-9, { se: 1e-9, parameters: { pHMin: 1, pHMax: 8 } })), withId('m3', item('freeMetal_frac', 5e-5))]),
  agent('half', [withId('h1', relaxivity(6))]),
]
const profile = { ...DEFAULT_PROFILE, limitRatioR2R1: 2 }

/** The slow part without a range of its own: what varies is the agent's. */
const fixedSlow = { ...profile, slowShareLow_frac: 0.005, slowShareHigh_frac: 0.005, slowHalfLifeLow_s: profile.slowHalfLife_s, slowHalfLifeHigh_s: profile.slowHalfLife_s }

function drawsOf(one: AgentEvidence, seed: string, under = profile): AgentDraws {
  const shared = sharedDraws(under, seed, DRAWS)
  const answer = drawAgent(agentFacts(one, under, { ...signed, cache: createPlacementCache() }), under, shared)
  if (!answer.ok) throw new Error(answer.message)
  return answer
}

const sorted = (values: Float64Array): Float64Array => Float64Array.from(values).sort()
const mean = (values: Float64Array): number => values.reduce((a, b) => a + b, 0) / values.length

describe('draws keep their bits', () => {
  it('give the committed hash [our own earlier output: a regression snapshot, no proof of being right]', () => {
    const hash = createHash('sha256')
    for (const one of programme) {
      const draws = drawsOf(one, 'map/1')
      for (const values of [draws.workingConc_mM, draws.loss_frac, draws.unbound_uM]) {
        if (values === null) continue
        const bytes = Buffer.alloc(8 * values.length)
        values.forEach((value, i) => bytes.writeDoubleLE(value, 8 * i))
        hash.update(bytes)
      }
    }
    expect(hash.digest('hex')).toBe(sha256)
  })

  it('do not move when agents are added, taken away or listed in another order', () => {
    const all = drawChances(programme, profile, { ...signed, seed: 7, draws: 512 })
    const fewer = drawChances([programme[2]!, programme[0]!], profile, { ...signed, seed: 7, draws: 512 })
    for (const one of fewer) expect(one.loss_frac).toEqual(all.find(other => other.complexId === one.complexId)!.loss_frac)
    const turned = drawChances([...programme].reverse(), profile, { ...signed, seed: 7, draws: 512 })
    expect([...turned].reverse()).toEqual(all)
    expect(drawChances(programme, profile, { ...signed, seed: 8, draws: 512 })).not.toEqual(all)
  })
})

describe('distributions', () => {
  const n = 40_000
  const z = normals('test', ['z'], n)

  it('log-normal: median v, σ of the logarithm √ln(1 + (s/v)²) [methods, section 7]', () => {
    const draws = sorted(logNormal(2, 1, z))
    // 0.02: four standard errors of a median of 40 000 with σ = 0.47
    expect(Math.abs(quantileOf(draws, 0.5) / 2 - 1)).toBeLessThan(0.02)
    const sigma = Math.sqrt(Math.log(1.25))
    expect(quantileOf(draws, 0.975) / (2 * Math.exp(1.96 * sigma))).toBeCloseTo(1, 1)
    expect([...logNormal(2, 0, z.slice(0, 3))]).toEqual([2, 2, 2])
  })

  it('asymmetric interval: the ends hold 95 % and the value is the median', () => {
    const draws = sorted(splitLogNormal(30, 6, 365, z))
    expect(quantileOf(draws, 0.5) / 30).toBeCloseTo(1, 1)
    expect(Math.log(quantileOf(draws, 0.025) / 6)).toBeCloseTo(0, 1)
    expect(Math.log(quantileOf(draws, 0.975) / 365)).toBeCloseTo(0, 1)
  })

  it('bounds are never crossed: at most stays below, at least stays above with 95 % within a decade', () => {
    expect(Math.max(...below(3, z))).toBeLessThanOrEqual(3)
    expect(Math.min(...below(3, z))).toBeGreaterThanOrEqual(0)
    const up = sorted(above(3, z))
    expect(up[0]!).toBeGreaterThanOrEqual(3)
    expect(quantileOf(up, 0.95) / 30).toBeCloseTo(1, 1)
  })

  it('correlated deviates have the correlation asked for, and an impossible one is refused [Cholesky]', () => {
    const factor = choleskyOf(2, () => -0.8)!
    const [a, b] = correlate(factor, [z, normals('test', ['y'], n)]) as [Float64Array, Float64Array]
    expect(mean(a.map((x, i) => x * b[i]!))).toBeCloseTo(-0.8, 1)
    expect(mean(b.map(x => x * x))).toBeCloseTo(1, 1)
    expect(choleskyOf(3, (i, j) => (i + j === 1 || i + j === 3 ? 0.9 : -0.9))).toBeNull()
    expect(choleskyOf(2, () => 1)![3]).toBe(0)
  })
})

describe('draws of an agent', () => {
  it('have the spread of the closed form where one constant varies [log-normal through a monotone map]', () => {
    const chances = drawChances([programme[2]!], fixedSlow, { ...signed, seed: 'a' })[0]!
    const sigma = Math.sqrt(Math.log(1 + (1 / 3) ** 2))
    const [low, high] = [-1.96, 1.96].map(k => lossFraction(3e-9 * Math.exp(k * sigma), fixedSlow)) as [number, number]
    expect(chances.loss_frac![0] / low).toBeCloseTo(1, 1)
    expect(chances.loss_frac![1] / high).toBeCloseTo(1, 1)
  })

  it('share the scale error of one stock: it moves both concentrations together', () => {
    const tight = (code: string) => agent(code, [withId(`${code}1`, relaxivity(4, { se: 0.0801, covarianceGroup: { id: 'stock', scaleFraction: 0.02 } }))])
    const [a, b] = [drawsOf(tight('p'), 's').workingConc_mM!, drawsOf(tight('q'), 's').workingConc_mM!]
    const [la, lb] = [a.map(Math.log), b.map(Math.log)]
    const [ma, mb] = [mean(la), mean(lb)]
    const cov = mean(la.map((x, i) => (x - ma) * (lb[i]! - mb)))
    const correlation = cov / Math.sqrt(mean(la.map(x => (x - ma) ** 2)) * mean(lb.map(x => (x - mb) ** 2)))
    // shared variance 0.02² of 0.0801²/16 in all: 0.9975
    expect(correlation).toBeGreaterThan(0.98)
  })

  it('narrow a sum of two anti-correlated constants of one fit [propagation of error]', () => {
    const pair = (rho: number) => {
      const group = (other: string) => ({ id: 'fit', scaleFraction: 0, correlation: { [other]: rho } })
      return agent('c', [relaxivity(4), withId('ca', rateItem('k0_per_s', 1e-9, { se: 2e-10, covarianceGroup: group('cb') })), withId('cb', rateItem('kZn_per_M_s', 1e-4, { se: 2e-5, covarianceGroup: group('ca') }))])
    }
    const width = (rho: number): number => {
      const draws = sorted(drawsOf(pair(rho), 'w', fixedSlow).loss_frac!)
      return Math.log(quantileOf(draws, 0.84) / quantileOf(draws, 0.16))
    }
    // ρ is that of the logarithms: the values then have (e^ρσ² − 1)/(e^σ² − 1), and the variance of their sum goes with 1 + that
    const s2 = Math.log(1 + 0.2 ** 2)
    const expected = (rho: number): number => Math.sqrt(1 + Math.expm1(rho * s2) / Math.expm1(s2))
    for (const rho of [-0.9, 0.9]) expect(Math.abs(width(rho) / width(0) / expected(rho) - 1), `${rho}`).toBeLessThan(0.08)
  })

  it('are refused with a reason when the stated correlations cannot all hold', () => {
    const group = (correlation: Record<string, number>) => ({ id: 'fit', scaleFraction: 0, correlation })
    const impossible = agent('z', [relaxivity(4), withId('za', rateItem('k0_per_s', 1e-9, { covarianceGroup: group({ zb: 0.9, zc: -0.9 }) })), withId('zb', rateItem('kZn_per_M_s', 1e-4, { covarianceGroup: group({ zc: 0.9 }) })), withId('zc', rateItem('kCu_per_M_s', 1e-3, { covarianceGroup: group({}) }))])
    const chances = drawChances([impossible], profile, { ...signed, seed: 1, draws: 64 })[0]!
    expect(chances.refused).toMatch(/cannot all hold/)
    expect(chances.meetsLimits_frac).toBeNull()
  })
})

describe('chances', () => {
  const chances = drawChances(programme, profile, { ...signed, seed: 'map/1' })
  const of = (code: string) => chances.find(one => one.complexId === `id-${code}`)!

  it('are "not known" while a limit has no measurement, and name it; the measured ones are still counted', () => {
    expect(of('ring').meetsLimits_frac).toBeNull()
    expect(of('ring').notKnown).toEqual(['ratio'])
    expect(of('ring').meetsMeasured_frac).toBeGreaterThan(0.9)
    expect(of('half').notKnown).toEqual(['loss', 'unbound', 'freeMetal', 'ratio'])
    expect(of('half')).toMatchObject({ onFront_frac: null, rank: null, loss_frac: null })
  })

  it('are full where every limit is measured and met by far', () => {
    const full = agent('full', [...programme[0]!.evidence, item('r2_per_mM_s', 5, { se: 0.1, conditions: relaxivity(1).conditions })])
    expect(drawChances([full], profile, { ...signed, seed: 2 })[0]!.meetsLimits_frac).toBeGreaterThan(0.9)
  })

  it('see the one that lets go at once fail, and never stand on the front', () => {
    expect(of('open').limitChances.loss).toBe(0)
    expect(of('open').onFront_frac).toBe(0)
    expect(of('open').rank).toEqual({ median: 3, interval: [3, 3] })
  })

  it('name the evidence without an error, and carry the decades beside the probability', () => {
    expect(of('mid').fixed).toEqual(['m3'])
    expect(of('mid').decadesExtrapolated).toBe(0)
    expect(of('mid').preparations).toBe(1)
  })

  it('put an agent alone on the front in every draw in which it meets its limits', () => {
    const alone = drawChances([programme[2]!], profile, { ...signed, seed: 3, draws: 1000 })[0]!
    expect(alone.onFront_frac).toBe(alone.meetsMeasured_frac)
    expect(alone.rank).toEqual({ median: 1, interval: [1, 1] })
  })
})

import { describe, expect, it } from 'vitest'
import { drawChances } from '#shared/science/placement/draws'
import { narrowings } from '#shared/science/placement/narrowing'
import { DEFAULT_PROFILE } from '#shared/science/placement/profile'
import { agent, rateItem, relaxivity, simpleAgent } from './placement/agents'

const OPTIONS = { includeUnsigned: false, seed: 'narrowing', draws: 512 }
const PROFILE = { ...DEFAULT_PROFILE, slowShare_frac: 0 }
const width = ([low, high]: readonly [number, number]) => high - low

/** Twelve agents a few per cent apart, so that errors of 5 % mix their places. */
const CLOSE = Array.from({ length: 12 }, (_, i) => simpleAgent(`N-${String(i).padStart(2, '0')}`, 1e-6 * 1.03 ** i, 4))

describe('how far a measurement would narrow a place', () => {
  it('starts from the range of rank that the map draws [the definition: draws.ts]', () => {
    const map = new Map(drawChances(CLOSE, PROFILE, OPTIONS).map(one => [one.complexId, one.rank!.interval]))
    const found = narrowings(CLOSE, PROFILE, OPTIONS)
    expect(found).toHaveLength(12)
    for (const one of found) expect([one.complexId, one.rank]).toEqual([one.complexId, map.get(one.complexId)])
    expect(found.some(one => width(one.rank) > 0)).toBe(true)
  })

  it('names the coordinate that carries the error: holding that one closes the range, holding the other does not [by construction]', () => {
    const exact = (code: string, kd: number) => agent(code, [relaxivity(4, { se: 1e-9 }), rateItem('k0_per_s', kd, { se: 1e-15 })])
    const vague = agent('N-50', [relaxivity(4, { se: 1.2 }), rateItem('k0_per_s', 1e-6, { se: 1e-15 })])
    const found = narrowings([exact('N-49', 0.9e-6), vague, exact('N-51', 1.1e-6)], PROFILE, OPTIONS)
    const one = found.find(each => each.complexId === 'id-N-50')!
    expect([one.rank, one.rankAtConcentration, one.rankAtLoss]).toEqual([[1, 3], [2, 2], [1, 3]])
  })

  it('keeps what all agents share: a profile whose slow part is uncertain does not stand in for an error of the agent [by construction]', () => {
    const exact = (code: string, kd: number) => agent(code, [relaxivity(4, { se: 1e-9 }), rateItem('k0_per_s', kd, { se: 1e-15 })])
    const vague = agent('N-60', [relaxivity(4, { se: 1e-9 }), rateItem('k0_per_s', 1e-6, { se: 3e-7 })])
    const uncertain = { ...DEFAULT_PROFILE, slowShare_frac: 0.02, slowShareLow_frac: 0.002, slowShareHigh_frac: 0.2 }
    const one = narrowings([exact('N-59', 0.9e-6), vague, exact('N-61', 1.1e-6)], uncertain, OPTIONS).find(each => each.complexId === 'id-N-60')!
    expect([one.rank, one.rankAtConcentration, one.rankAtLoss]).toEqual([[1, 3], [1, 3], [2, 2]])
  })

  it('is the same bits again, and does not depend on the order of the agents', () => {
    const again = narrowings([...CLOSE].reverse(), PROFILE, OPTIONS).sort((a, b) => a.complexId < b.complexId ? -1 : 1)
    expect(again).toEqual(narrowings(CLOSE, PROFILE, OPTIONS))
  })

  it('leaves out who is in a lane or of another mechanism', () => {
    const others = [agent('N-90', [relaxivity(4)]), { ...simpleAgent('N-91', 1e-6, 4), mechanism: 'T2' as const }]
    expect(narrowings([...others, CLOSE[0]!], PROFILE, OPTIONS).map(one => [one.complexId, one.rank])).toEqual([['id-N-00', [1, 1]]])
  })
})

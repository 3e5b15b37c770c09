import { describe, expect, it } from 'vitest'
import { gapsUnder } from '#shared/map/gaps'
import { READINESS_ITEMS, readinessGaps } from '#shared/readiness'
import { DEFAULT_PROFILE } from '#shared/science/placement/profile'
import type { AgentEvidence } from '#shared/science/placement/types'
import { agent, item, rateItem, relaxivity, simpleAgent } from '../science/placement/agents'

const PROFILE = { ...DEFAULT_PROFILE, slowShare_frac: 0 }
const under = (agents: readonly AgentEvidence[], readiness: readonly string[] = []) => gapsUnder(agents.map(evidence => ({ evidence, readiness })), PROFILE, 'gaps')
const exact = (code: string, kd: number) => agent(code, [relaxivity(4, { se: 1e-9 }), rateItem('k0_per_s', kd, { se: 1e-15 })])
const vague = agent('G-50', [relaxivity(4, { se: 1.2 }), rateItem('k0_per_s', 1e-6, { se: 1e-15 })])
const lane = agent('G-60', [relaxivity(4)])
const PLANE = [exact('G-49', 0.9e-6), vague, exact('G-51', 1.1e-6)]

describe('what a gap would settle', () => {
  it('is the places that a sharper value would close, as a share of all that are open [by construction]', () => {
    const { gaps, placed, openPlaces } = under([...PLANE, lane])
    // the vague one is open over three places, its neighbours over two each at most, the one in the lane over all
    expect(placed).toBe(3)
    const own = gaps.find(one => one.agent === 'G-50' && one.key === 'sharperConcentration')!
    expect(own).toMatchObject({ rankNow: [1, 3], rankThen: [2, 2], places: 2, isAtMost: false, share_frac: 2 / openPlaces })
    expect(gaps.some(one => one.agent === 'G-50' && one.key === 'sharperLoss')).toBe(false)
    expect(gaps[0]).toMatchObject({ agent: 'G-60', key: 'loss', rankNow: [1, 4], rankThen: null, places: 3, isAtMost: true, share_frac: 3 / openPlaces })
    expect(openPlaces).toBeGreaterThanOrEqual(5)
  })

  it('is nothing by itself where both coordinates are missing, or where the mechanism is another', () => {
    const { gaps } = under([...PLANE, agent('G-70', []), { ...lane, complexId: 'id-G-80', code: 'G-80', mechanism: 'T2' }])
    const of = (code: string) => gaps.filter(one => one.agent === code && ['concentration', 'loss'].includes(one.key))
    expect(of('G-70').map(one => [one.places, one.note])).toEqual([[0, expect.stringContaining('together')], [0, expect.stringContaining('together')]])
    expect(of('G-80').every(one => one.places === 0 && one.note?.includes('T2'))).toBe(true)
  })

  it('names the limits that cannot be judged, and a bound that does not decide', () => {
    const high = item('freeMetal_frac', 10 * PROFILE.limitFreeMetal_frac, { kind: '<', batchId: 'b1' })
    const { gaps } = under([agent('G-90', [relaxivity(4), rateItem('k0_per_s', 1e-6), high])])
    expect(gaps.find(one => one.key === 'bound')?.limits).toContain('Free metal in the batch')
    expect(gaps.some(one => one.key === 'freeMetal')).toBe(false)
    expect(under([simpleAgent('G-91', 1e-6, 4)]).gaps.find(one => one.key === 'equilibrium')?.limits).toEqual(['pM', 'Bound at equilibrium'])
  })

  it('asks for the competitors where they were left out of the plasma model, in the words of the map', () => {
    const logK = item('logK', 17, { se: 0.1, parameters: { metal: 'Gd', protonation: [10.5, 8.6, 4.3] } })
    const { gaps } = under([agent('G-92', [relaxivity(4), rateItem('k0_per_s', 1e-6), logK])])
    expect(gaps.find(one => one.key === 'competitors')).toMatchObject({ what: expect.stringMatching(/no log K for .*Zn/), limits: ['Bound at equilibrium'], places: 0 })
    expect(gaps.some(one => one.key === 'equilibrium')).toBe(false)
  })

  it('puts readiness last among what moves nothing, and leaves it out where nothing is missing', () => {
    const items = readinessGaps(null, 0)
    expect(items).toHaveLength(READINESS_ITEMS.length + 1)
    expect(under([lane], items).gaps.at(-1)).toMatchObject({ key: 'readiness', places: 0, what: expect.stringContaining('Batches made') })
    expect(under([lane]).gaps.some(one => one.key === 'readiness')).toBe(false)
  })

  it('is the same bits again', () => {
    expect(under([...PLANE, lane])).toEqual(under([...PLANE, lane]))
    expect(under([])).toEqual({ gaps: [], placed: 0, openPlaces: 0 })
  })
})

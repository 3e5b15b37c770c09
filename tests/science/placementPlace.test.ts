import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { createPlacementCache } from '#shared/science/placement/cache'
import { LIMITS, outcomeOf } from '#shared/science/placement/limits'
import { placeAgents } from '#shared/science/placement/place'
import { DEFAULT_PROFILE, type ScreeningProfile } from '#shared/science/placement/profile'
import { PROFILE_FIELDS, PROFILE_GROUPS, profileProblems } from '#shared/science/placement/profileFields'
import { percentText } from '#shared/science/placement/verdict'
import type { AgentEvidence, PlacedQuantity, Placement } from '#shared/science/placement/types'
import { agent, item, publishedAgent, rateItem, relaxivity, simpleAgent } from './placement/agents'

const place = (agents: AgentEvidence[], profile: ScreeningProfile = DEFAULT_PROFILE, includeUnsigned = false): Placement[] => placeAgents(agents, profile, { includeUnsigned })
const one = (evidence: AgentEvidence, profile = DEFAULT_PROFILE, includeUnsigned = false): Placement => place([evidence], profile, includeUnsigned)[0]!
const published = place((['DTPA', 'DTPA-BMA', 'DOTA', 'HP-DO3A'] as const).map(publishedAgent))
const of = (code: string, from = published): Placement => from.find(p => p.code === code)!

describe('published complexes on the map', () => {
  it('has the bisamide lose more than DTPA and both far more than DOTA when no competitor is there [published rate constants, from memory]', () => {
    const bare = place((['DTPA', 'DTPA-BMA', 'DOTA'] as const).map(publishedAgent), { ...DEFAULT_PROFILE, exchangeableZn_uM: 0, exchangeableCu_uM: 0, exchangeableCa_mM: 0 })
    const loss = (code: string): number => of(code, bare).loss_frac!.value
    expect(loss('Gd-DTPA-BMA')).toBeGreaterThan(10 * loss('Gd-DTPA'))
    expect(loss('Gd-DTPA')).toBeGreaterThan(10 * loss('Gd-DOTA'))
  })

  it('has both open-chain complexes within 1.5 times with copper 1 µM and zinc 10 µM, at least 1000 above DOTA [Sarka et al. 2002]', () => {
    const [a, b, c] = ['Gd-DTPA', 'Gd-DTPA-BMA', 'Gd-DOTA'].map(code => of(code).loss_frac!.value) as [number, number, number]
    expect(Math.max(a / b, b / a)).toBeLessThan(1.5)
    expect(Math.min(a, b) / c).toBeGreaterThan(1000)
  })

  it('shows what rates do not: pGd 19.1 holds and 15.8 falls below 16 [published pGd]', () => {
    expect(of('Gd-DTPA').pM!.value).toBeCloseTo(19.1, 1)
    expect(of('Gd-DTPA-BMA').pM!.value).toBeCloseTo(15.8, 1)
    expect(of('Gd-DTPA').verdict.equilibrium).toBe('holds')
    expect(of('Gd-DTPA-BMA').verdict.equilibrium).toBe('condemns')
    expect(of('Gd-DTPA-BMA').verdict.kinetics).toBe('letsGo')
    expect(of('Gd-DTPA').verdict.disagree).toBe(true)
    expect(of('Gd-DOTA').verdict).toMatchObject({ equilibrium: 'holds', kinetics: 'holds', disagree: false })
  })

  it('says that constants at 25 °C were not carried to 37 °C, and names competitors without a constant', () => {
    const ids = of('Gd-DOTA').flags.map(flag => flag.id)
    expect(ids).toContain('temperatureNotCarried')
    expect(ids).toContain('missingRateTerm')
    expect(of('Gd-DTPA').flags.find(flag => flag.id === 'missingRateTerm')!.sentence).toBe('No constant for Ca: the rate leaves it out.')
  })
})

describe('records that meet', () => {
  it('takes the pM that its record emitted, with the errors of the protonation constants, before one worked out anew', () => {
    const base = [relaxivity(4), item('logK', 22.46, { se: 0.1, parameters: { metal: 'Gd', protonation: [10.49, 8.6] } })]
    expect(one(agent('a', base)).pM).toMatchObject({ se: expect.closeTo(0.1, 6) as number })
    const emitted = item('pM', 18.9, { se: 0.2, parameters: { mixedMedia: true, mediumNote: 'log K and protonation constants come from different media: electrolyte NaCl and KCl.' } })
    const p = one(agent('a', [...base, emitted]))
    expect(p.pM).toMatchObject({ value: 18.9, se: 0.2, evidenceIds: [emitted.id] })
    expect(p.flags.find(flag => flag.id === 'mediumAssumed')!.sentence).toMatch(/different media/)
  })

  it('never mixes the constants of the sum form with those of the saturation form: the newest record decides', () => {
    const sum = ['k0_per_s', 'k1_per_M_s'].map((name, i) => rateItem(name, 10 ** (-9 - i), { parameters: { form: 'sum' } }))
    const saturation = [['k0_per_s', 5e-9], ['k1_per_s', 1e-5], ['kProton_per_M', 100]].map(([name, value]) => rateItem(name as string, value as number, { parameters: { form: 'saturation' } }))
    const later = one(agent('a', [relaxivity(4), ...sum, ...saturation]))
    expect(new Set(later.kd_per_s!.evidenceIds)).toEqual(new Set(saturation.map(i => i.id)))
    const newer = rateItem('k1_per_M_s', 1e-3, { parameters: { form: 'sum' } })
    expect(new Set(one(agent('a', [relaxivity(4), ...sum, ...saturation, newer])).kd_per_s!.evidenceIds)).toEqual(new Set([sum[0]!.id, newer.id]))
  })
})

describe('a working concentration outside what was measured', () => {
  const placed = (parameters: Record<string, number>) => one(agent('a', [{ ...relaxivity(4), parameters }])).flags.find(flag => flag.id === 'outsideMeasured')
  it('is flagged where the line is bent, and only there [methods: relaxivity]', () => {
    // ΔR1 of 1 per s and r1 of 4 ask for 0.25 mM.
    expect(placed({ lowestConc_mM: 0.5, highestConc_mM: 2, quadraticP: 0.001 })!.sentence).toMatch(/^The working concentration, 0\.25 mM, lies outside the 0\.5 to 2 mM/)
    expect(placed({ lowestConc_mM: 0, highestConc_mM: 0.2, quadraticP: 0.001 })).toBeDefined()
    expect(placed({ lowestConc_mM: 0, highestConc_mM: 2, quadraticP: 0.001 })).toBeUndefined()
    expect(placed({ lowestConc_mM: 0.5, highestConc_mM: 2, quadraticP: 0.6 })).toBeUndefined()
    expect(placed({})).toBeUndefined()
  })
})

describe('verdict', () => {
  it('shows a low log K that does not let go for what it is: equilibrium against it, kinetics for it', () => {
    const tetraamide = agent('amide', [relaxivity(2.5), rateItem('k0_per_s', 1e-10), item('logK', 12.8, { parameters: { metal: 'Gd', protonation: [9.56, 5.95] } })])
    const { verdict } = one(tetraamide)
    expect(verdict).toMatchObject({ equilibrium: 'condemns', kinetics: 'holds', disagree: true })
    expect(verdict.summary).toMatch(/Inertness counts first/)
    expect(verdict).toMatchObject({ inWords: 'Holds weakly at equilibrium, lets go very slowly.', mapUses: 'kinetics' })
    expect(verdict.why).toMatch(/^The map uses kinetics/)
  })

  it('says in one line how firmly each holds, and of what is not known that it is not', () => {
    const inWords = (rate_per_s: number | null, logK: number | null) => one(agent('a', [
      relaxivity(4), ...(rate_per_s === null ? [] : [rateItem('k0_per_s', rate_per_s)]),
      ...(logK === null ? [] : [item('logK', logK, { parameters: { metal: 'Gd', protonation: [9.56, 5.95] } })]),
    ])).verdict.inWords
    expect(inWords(1e-10, 26)).toBe('Holds strongly at equilibrium, lets go very slowly.')
    expect(inWords(1e-4, 12)).toBe('Holds weakly at equilibrium, lets go too quickly.')
    expect(inWords(null, 12)).toBe('Holds weakly at equilibrium, kinetics not known.')
    expect(inWords(1e-4, null)).toBe('Equilibrium not known, lets go too quickly.')
    expect(inWords(null, null)).toBe('Neither equilibrium nor kinetics is known.')
  })

  it('compares nothing when one side is not known', () => {
    expect(one(agent('x', [relaxivity(4)])).verdict).toMatchObject({ equilibrium: 'not known', kinetics: 'not known', disagree: false, kineticsSentence: 'Kinetics: not known, no rate constants.', mapUses: 'neither' })
  })

  it('writes fractions as percentages that a person can read', () => {
    expect([0, 1e-9, 1.23e-7, 0.00123, 0.0165, 0.5, 0.9990, 0.999999, 1].map(percentText)).toEqual(
      ['0 %', 'less than 0.000001 %', '0.000012 %', '0.12 %', '1.7 %', '50 %', '99.90 %', '99.9999 %', '100 %'])
  })
})

describe('lanes', () => {
  it('has four of them, and each says what is missing', () => {
    const [r, k] = [relaxivity(4), rateItem('k0_per_s', 1e-9)]
    const lanes = place([agent('a', [r, k]), agent('b', [r]), agent('c', [k]), agent('d', [])])
    expect(lanes.map(p => p.lane)).toEqual(['plane', 'lossMissing', 'concentrationMissing', 'neither'])
    expect(lanes.map(p => p.missing.map(m => m.key))).toEqual([['freeMetal', 'equilibrium'], ['loss', 'freeMetal', 'equilibrium'], ['concentration', 'freeMetal', 'equilibrium'], ['concentration', 'loss', 'freeMetal', 'equilibrium']])
    for (const p of lanes) for (const m of p.missing) expect(m.whoCanMeasure.length).toBeGreaterThan(5)
    expect(lanes[3]).toMatchObject({ workingConc_mM: null, loss_frac: null, unbound_uM: null, signed: false })
  })

  it('does not turn an acid half-life or an index into a loss, but prints them', () => {
    const p = one(agent('acid', [relaxivity(4), item('halfLifeAcid_s', 5, { kind: '<', unit: 's' }), item('zincPhosphateRatio', 0.49)]))
    expect(p.lane).toBe('lossMissing')
    expect(p.acidHalfLife_s).toMatchObject({ value: 5, kind: '<' })
    expect(p.zincPhosphateRatio!.value).toBe(0.49)
    expect(p.missing[0]!.what).toMatch(/only a half-life in acid and a zinc–phosphate ratio/)
  })
})

describe('bounds', () => {
  const bounded = agent('bound', [relaxivity(4), rateItem('k0_per_s', 1e-9, { kind: '<', se: null }), item('freeMetal_frac', 1e-4)])

  it('draws "at most" with an arrow and no ellipse, and judges the limit by the bound', () => {
    const p = one(bounded)
    expect(p.loss_frac!.kind).toBe('<')
    expect(p.arrows).toEqual([{ axis: 'loss', towards: 'lower' }])
    expect(p.ellipse68).toBeNull()
    expect(p.halfLife_s!.kind).toBe('>')
    expect(p.limits.find(l => l.key === 'loss')!.outcome).toBe('within')
    expect(p.onFront).toBe(true)
  })

  it('decides on a limit only from the side that the bound lies on', () => {
    const q = (value: number, kind: PlacedQuantity['kind']): PlacedQuantity => ({ value, kind, se: null, interval: null, unit: '', evidenceIds: [], label: '', carried: false })
    const atMost = { bound: 'atMost', atInterval: false } as const
    const atLeast = { bound: 'atLeast', atInterval: false } as const
    expect([outcomeOf(q(2, '<'), 3, atMost), outcomeOf(q(5, '<'), 3, atMost), outcomeOf(q(5, '>'), 3, atMost), outcomeOf(q(2, '>'), 3, atMost)]).toEqual(['within', 'not known', 'over', 'not known'])
    expect([outcomeOf(q(2, '<'), 3, atLeast), outcomeOf(q(5, '<'), 3, atLeast), outcomeOf(q(5, '>'), 3, atLeast), outcomeOf(q(2, '>'), 3, atLeast)]).toEqual(['over', 'not known', 'within', 'not known'])
    expect([outcomeOf(q(3, '='), 3, atMost), outcomeOf(q(3, '='), 3, atLeast), outcomeOf(null, 3, atMost)]).toEqual(['within', 'within', 'not known'])
  })

  it('judges the loss at its upper 95 % end', () => {
    const kd = 1.8e-8
    const p = one(agent('edge', [relaxivity(4), rateItem('k0_per_s', kd, { se: 0.5 * kd }), item('freeMetal_frac', 0)]))
    expect(p.loss_frac!.value).toBeLessThan(DEFAULT_PROFILE.limitLoss_frac)
    expect(p.loss_frac!.interval![1]).toBeGreaterThan(DEFAULT_PROFILE.limitLoss_frac)
    expect(p.limits.find(l => l.key === 'loss')!.outcome).toBe('over')
    expect(p.withinLimits).toBe(false)
    expect(p.onFront).toBe(false)
  })
})

describe('stem, unbound metal and limits', () => {
  it('moves the stem, not the mark, with another batch', () => {
    const base = [relaxivity(4), rateItem('k0_per_s', 1e-9)]
    const [clean, dirty] = [one(agent('a', [...base, item('freeMetal_frac', 1e-5)])), one(agent('a', [...base, item('freeMetal_frac', 2e-3)]))]
    expect(clean.loss_frac!.value).toBe(dirty.loss_frac!.value)
    expect(dirty.stem!.toUnbound_frac).toBeGreaterThan(clean.stem!.toUnbound_frac)
    expect(dirty.limits.find(l => l.key === 'freeMetal')!.outcome).toBe('over')
    expect(clean.unbound_umol_per_kg!.value).toBeCloseTo(clean.unbound_uM!.value * 0.25, 15)
  })

  it('says "not known" for a limit without a measurement, never zero, and does not bar for it', () => {
    const p = one(agent('a', [relaxivity(4), rateItem('k0_per_s', 1e-10)]))
    expect(p.limits.filter(l => l.outcome === 'not known').map(l => l.key)).toEqual(['unbound', 'freeMetal', 'freeMetalWarning', 'pM', 'zincPhosphate', 'boundAtEquilibrium', 'ratio'])
    expect(p.withinLimits).toBe(true)
    expect(LIMITS.every(limit => PROFILE_FIELDS.some(field => field.key === limit.field))).toBe(true)
  })

  it('keeps the evidence ids behind every number', () => {
    const p = one(simpleAgent('a', 1e-9, 4))
    for (const q of [p.workingConc_mM, p.kd_per_s, p.halfLife_s, p.loss_frac, p.freeMetal_frac, p.unbound_uM]) {
      expect(q!.evidenceIds.length).toBeGreaterThan(0)
      for (const id of q!.evidenceIds) expect(p.evidenceIds).toContain(id)
    }
  })
})

describe('front, ranks, signatures', () => {
  it('leaves unsigned, over-limit, disputed and other-mechanism agents off the front', () => {
    const good = simpleAgent('good', 1e-9, 3)
    const unsigned = agent('unsigned', [relaxivity(9, { signed: false }), rateItem('k0_per_s', 1e-12)])
    const dirty = agent('dirty', [relaxivity(9), rateItem('k0_per_s', 1e-12), item('freeMetal_frac', 0.5)])
    const disputed = agent('disputed', [relaxivity(8, { se: 0.01 }), relaxivity(9, { se: 0.01 }), rateItem('k0_per_s', 1e-12)])
    const other = { ...simpleAgent('other', 1e-12, 9), mechanism: 'T2' as const }
    const placed = place([good, unsigned, dirty, disputed, other], DEFAULT_PROFILE, true)
    expect(placed.filter(p => p.onFront).map(p => p.code)).toEqual(['good'])
    expect(of('unsigned', placed).signed).toBe(false)
    expect(of('disputed', placed).split).toHaveLength(2)
    expect(of('other', placed).eligibleMechanism).toBe(false)
    expect(of('other', placed).rank).toBeNull()
    expect(of('unsigned', place([good, unsigned])).lane).toBe('concentrationMissing')
  })

  it('is the same for every agent whatever their order [property]', () => {
    const many = Array.from({ length: 12 }, (_, i) => simpleAgent(`a${i}`, 1e-10 * (1 + (i * 7) % 11), 3 + ((i * 5) % 7) / 3))
    const base = place(many)
    fc.assert(fc.property(fc.shuffledSubarray(many, { minLength: 12, maxLength: 12 }), (shuffled) => {
      const placed = place(shuffled)
      for (const p of base) {
        const q = placed.find(other => other.complexId === p.complexId)!
        expect([q.onFront, q.frontSolid, q.rank]).toEqual([p.onFront, p.frontSolid, p.rank])
      }
    }), { seed: 37, numRuns: 40 })
  })

  it('moves a mark down when relaxivity rises and left when the rate falls; its rank never worsens [monotone]', () => {
    const rivals = [1, 2, 3, 4].map(i => simpleAgent(`r${i}`, i * 1e-9, 3 + i / 2))
    const before = of('x', place([...rivals, simpleAgent('x', 2.5e-9, 4)]))
    const after = of('x', place([...rivals, simpleAgent('x', 2e-9, 4.5)]))
    expect(after.workingConc_mM!.value).toBeLessThan(before.workingConc_mM!.value)
    expect(after.loss_frac!.value).toBeLessThan(before.loss_frac!.value)
    expect(after.rank!).toBeLessThanOrEqual(before.rank!)
  })

  it('gives the same answer with a cache kept from one profile to the next', () => {
    const cache = createPlacementCache()
    const agents = (['DTPA', 'DOTA'] as const).map(publishedAgent)
    for (const pH of [7.4, 7.2, 7.4]) {
      const profile = { ...DEFAULT_PROFILE, pH }
      expect(placeAgents(agents, profile, { includeUnsigned: false, cache })).toEqual(placeAgents(agents, profile, { includeUnsigned: false }))
    }
  })
})

describe('profile', () => {
  it('starts from values that pass its own check, each described once', () => {
    expect(profileProblems(DEFAULT_PROFILE)).toEqual([])
    const keys = PROFILE_FIELDS.map(field => field.key)
    expect(new Set(keys).size).toBe(keys.length)
    const numbers = Object.entries(DEFAULT_PROFILE).filter(([, value]) => typeof value === 'number').map(([key]) => key)
    expect([...keys].sort()).toEqual(numbers.sort())
    for (const field of PROFILE_FIELDS) expect(PROFILE_GROUPS[field.group]).toBeTruthy()
  })

  it('names the field, what is wrong and what would be accepted', () => {
    expect(profileProblems({ ...DEFAULT_PROFILE, pH: NaN })).toEqual([{ key: 'pH', message: 'pH is not a number', accepted: '3 to 10' }])
    expect(profileProblems({ ...DEFAULT_PROFILE, b0_T: -1 })[0]).toMatchObject({ key: 'b0_T', accepted: '0.01 to 25 T' })
    expect(profileProblems({ ...DEFAULT_PROFILE, slowShareLow_frac: 0.02 })[0]!.key).toBe('slowShareLow_frac')
    expect(profileProblems({ ...DEFAULT_PROFILE, slowShare_frac: 0 })).toEqual([])
    expect(profileProblems({ ...DEFAULT_PROFILE, warnFreeMetal_frac: 0.01 })[0]!.key).toBe('warnFreeMetal_frac')
  })
})

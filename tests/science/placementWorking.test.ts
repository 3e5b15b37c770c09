import { describe, expect, it } from 'vitest'
import { distanceTo, mediumClass, nearestItems, targetOf } from '#shared/science/placement/matching'
import { poolItems } from '#shared/science/placement/pool'
import { DEFAULT_PROFILE } from '#shared/science/placement/profile'
import { indexEvidence } from '#shared/science/placement/read'
import { relaxivityRatio, workingConcentration } from '#shared/science/placement/working'
import type { EvidenceItem } from '#shared/science/placement/types'
import { AT_PROFILE, item, relaxivity } from './placement/agents'

const target = targetOf(DEFAULT_PROFILE)
const at = (more: Record<string, number | string | null>) => relaxivity(4, { conditions: { ...AT_PROFILE, ...more } })
const working = (evidence: EvidenceItem[], mechanism: 'T1' | 'T2' | 'CEST' = 'T1') => {
  const answer = workingConcentration(indexEvidence(evidence, false), mechanism, DEFAULT_PROFILE)
  if (!answer.ok) throw new Error(answer.missing.what)
  return answer.working
}

describe('which measurement counts', () => {
  it('counts within 2 K, 5 % of the field and 0.2 pH in the same medium class, and not beyond [methods, section 7]', () => {
    expect(distanceTo(at({}), target)).toBe(0)
    expect(distanceTo(at({ temperature_K: 312.15 }), target)).toBeCloseTo(1, 9)
    expect(distanceTo(at({ temperature_K: 312.2 }), target)).toBeNull()
    expect(distanceTo(at({ b0_T: 2.86 }), target)).not.toBeNull()
    expect(distanceTo(at({ b0_T: 2.84 }), target)).toBeNull()
    expect(distanceTo(at({ pH: 7.2 }), target)).toBeCloseTo(1, 9)
    expect(distanceTo(at({ pH: 7.19 }), target)).toBeNull()
    expect(distanceTo(at({ medium: 'HEPES buffer' }), target)).toBeNull()
  })

  it('does not count what states no medium, temperature or field; an unstated pH counts last', () => {
    for (const key of ['medium', 'temperature_K', 'b0_T']) expect(distanceTo(at({ [key]: null }), target), key).toBeNull()
    expect(distanceTo(at({ pH: null }), target)).toBe(1)
    expect(working([at({ pH: null })]).pHStated).toBe(false)
  })

  it('puts serum with plasma and keeps blood, water and an unheard-of medium apart', () => {
    expect(['Human plasma', 'serum', 'whole blood', 'PBS', 'water', 'agar'].map(mediumClass)).toEqual(['plasma', 'plasma', 'blood', 'aqueous', 'aqueous', 'agar'])
    expect(mediumClass(null)).toBeNull()
  })

  it('takes the nearest of several conditions and pools only those at that one', () => {
    const far = at({ temperature_K: 311.9 })
    const [near, twin] = [at({}), at({ temperature_K: 310.3 })]
    expect(nearestItems([far, twin, near], target)).toEqual([near, twin])
  })
})

describe('pooling', () => {
  const values = (...pairs: [number, number][]) => pairs.map(([value, se]) => relaxivity(value, { se }))

  it('weights by inverse variance [closed form]', () => {
    const pooled = poolItems(values([4, 0.1], [4.1, 0.2]))!
    expect(pooled.value).toBeCloseTo((4 / 0.01 + 4.1 / 0.04) / 125, 14)
    expect(pooled.se).toBeCloseTo(1 / Math.sqrt(125), 14)
    expect(pooled).toMatchObject({ birge: 1, disagree: false })
  })

  it('widens by the Birge factor where the scatter exceeds the errors [Birge 1932]', () => {
    const pooled = poolItems(values([4, 0.1], [4.2, 0.1]))!
    // χ² = 2 on one degree of freedom: factor √2, p = 0.157
    expect(pooled.birge).toBeCloseTo(Math.SQRT2, 12)
    expect(pooled.se).toBeCloseTo(0.1, 12)
    expect(pooled.p).toBeCloseTo(0.1573, 4)
    expect(pooled.disagree).toBe(false)
  })

  it('calls it a disagreement below p = 0.01 [χ² of 6.63 on one degree of freedom]', () => {
    expect(poolItems(values([4, 0.1], [4.36, 0.1]))!.disagree).toBe(false)
    expect(poolItems(values([4, 0.1], [4.37, 0.1]))!.disagree).toBe(true)
  })

  it('does not let repeats wear down a scale error that they share, and judges their scatter without it', () => {
    const group = { id: 'stock', scaleFraction: 0.02 }
    const own = 0.02
    const se = Math.sqrt(own ** 2 + (0.02 * 4) ** 2)
    const items = [4, 4.01, 3.99, 4].map(value => relaxivity(value, { se, covarianceGroup: group }))
    const pooled = poolItems(items)!
    expect(pooled.scales).toHaveLength(1)
    expect(pooled.scales[0]!.relative).toBeCloseTo(0.02, 4)
    expect(pooled.se! / pooled.value).toBeGreaterThan(0.02)
    expect(pooled.ownRelative!).toBeLessThan(0.004)
    const apart = [4, 4.2].map(value => relaxivity(value, { se: Math.sqrt(own ** 2 + (0.02 * value) ** 2), covarianceGroup: group }))
    expect(poolItems(apart)!.disagree).toBe(true)
  })

  it('gives no error where none is known, and prefers exact values to bounds', () => {
    expect(poolItems([relaxivity(4, { se: null }), relaxivity(5, { se: null })])).toMatchObject({ value: 4.5, se: null })
    expect(poolItems([relaxivity(4), relaxivity(3, { kind: '>' })])!.items).toHaveLength(1)
    expect(poolItems([relaxivity(3, { kind: '>' }), relaxivity(3.5, { kind: '>' })])).toMatchObject({ value: 3.5, kind: '>' })
    expect(poolItems([])).toBeNull()
    expect(poolItems([relaxivity(-1)])).toBeNull()
  })
})

describe('working concentration', () => {
  it('is ΔR1/r1: 0.25 mM for 1 s⁻¹ and 4 mM⁻¹ s⁻¹, with the relative error of r1 [closed form]', () => {
    const { quantity } = working([relaxivity(4, { se: 0.08 })])
    expect(quantity.value).toBeCloseTo(0.25, 15)
    expect(quantity.se).toBeCloseTo(0.25 * 0.02, 15)
    expect(quantity.interval![0] * quantity.interval![1]).toBeCloseTo(0.0625, 12)
    expect(quantity.unit).toBe('mM')
  })

  it('is ΔR2/r2 for a T2 agent and comes as evidence for a CEST agent', () => {
    expect(working([item('r2_per_mM_s', 20, { conditions: AT_PROFILE })], 'T2').quantity.value).toBeCloseTo(0.5, 15)
    expect(working([item('workingConcentration_mM', 7, { conditions: AT_PROFILE, se: 0.7 })], 'CEST').quantity).toMatchObject({ value: 7, kind: '=' })
  })

  it('turns "r1 at least" into "C_w at most"', () => {
    expect(working([relaxivity(4, { kind: '>' })]).quantity.kind).toBe('<')
  })

  it('draws each of the series that disagree', () => {
    const { split } = working([relaxivity(4, { se: 0.05 }), relaxivity(5, { se: 0.05 })])
    expect(split.map(mark => mark.workingConc_mM)).toEqual([0.25, 0.2])
  })

  it('says what is missing, where, and who could measure it', () => {
    const answer = workingConcentration(indexEvidence([at({ medium: 'water' })], false), 'T1', DEFAULT_PROFILE)
    expect(answer).toMatchObject({ ok: false, missing: { key: 'concentration' } })
    if (!answer.ok) expect(answer.missing.what).toMatch(/^r1 in plasma at 3 T, 37\.0 °C, pH 7\.4: measured once, but not within/)
    const none = workingConcentration(indexEvidence([], false), 'T1', DEFAULT_PROFILE)
    if (!none.ok) expect(none.missing.what).toMatch(/not measured$/)
  })

  it('uses unsigned values only where they are asked for and no signed one exists', () => {
    const [signed, unsigned] = [relaxivity(4), relaxivity(5, { signed: false })]
    expect(indexEvidence([signed, unsigned], true).get('r1_per_mM_s')).toEqual([signed])
    expect(indexEvidence([unsigned], true).get('r1_per_mM_s')).toEqual([unsigned])
    expect(indexEvidence([unsigned], false).get('r1_per_mM_s')).toBeUndefined()
    expect(indexEvidence([relaxivity(NaN), relaxivity(Infinity)], true).size).toBe(0)
  })
})

describe('r2/r1', () => {
  it('loses a scale error that both share, and keeps one that only one has [propagation of error]', () => {
    const group = { id: 'stock', scaleFraction: 0.03 }
    const pair = (other: typeof group | null) => relaxivityRatio(indexEvidence([
      relaxivity(4, { se: 4 * Math.hypot(0.01, 0.03), covarianceGroup: group }),
      item('r2_per_mM_s', 5, { se: 5 * Math.hypot(0.01, other ? 0.03 : 0), conditions: AT_PROFILE, covarianceGroup: other }),
    ], false), DEFAULT_PROFILE)!
    expect(pair(group).value).toBe(1.25)
    expect(pair(group).se! / 1.25).toBeCloseTo(0.01 * Math.SQRT2, 10)
    expect(pair(null).se! / 1.25).toBeCloseTo(Math.hypot(0.01, 0.01, 0.03), 10)
  })
})

import { describe, expect, it } from 'vitest'
import { carrySpecies, type Carry } from '#shared/science/equilibria/carry'
import { editMedium, NAMED_MEDIA } from '#shared/science/equilibria/namedMedia'
import type { Species } from '#shared/science/equilibria/system'

const carry = (change: Partial<Carry> = {}): Carry => ({
  from: { ionicStrength_M: 0, temperature_K: 298.15 }, to: { ionicStrength_M: 0.1, temperature_K: 298.15 }, charges: { H: 1, Zn: 2, Y: -4 }, enthalpies_kJ_per_mol: {}, ...change,
})
const species: Species[] = [{ name: 'OH', stoichiometry: { H: -1 }, logBeta: -13.997 }, { name: 'ZnY', stoichiometry: { Zn: 1, Y: 1 }, logBeta: 18 }]

describe('carried constants', () => {
  it('take pKw from 13.997 to 13.78 and Zn-EDTA from 18.0 to 16.5 between I = 0 and 0.1 M [NIST SRD 46; 13.78 from memory]', () => {
    const answer = carrySpecies(species, carry())
    if (!answer.ok) throw new Error(answer.message)
    expect(answer.species[0]!.logBeta).toBeCloseTo(-13.78, 1)
    // Davies is good to 0.3 for Δz² of −16
    expect(Math.abs(answer.species[1]!.logBeta - 16.5)).toBeLessThan(0.3)
    expect(answer.withinRange).toBe(true)
  })

  it('flag 1 M as outside Davies and name the species without an enthalpy', () => {
    const answer = carrySpecies(species, carry({ to: { ionicStrength_M: 1, temperature_K: 310.15 }, enthalpies_kJ_per_mol: { OH: 55.8 } }))
    expect(answer).toMatchObject({ ok: true, withinRange: false, notMovedInTemperature: ['ZnY'] })
  })

  it('come back to where they were', () => {
    const there = carrySpecies(species, carry())
    const back = there.ok ? carrySpecies(there.species, carry({ from: { ionicStrength_M: 0.1, temperature_K: 298.15 }, to: { ionicStrength_M: 0, temperature_K: 298.15 } })) : there
    if (!back.ok) throw new Error(back.message)
    back.species.forEach((one, j) => expect(one.logBeta).toBeCloseTo(species[j]!.logBeta, 12))
  })

  it.each<[string, Partial<Carry>, string]>([
    ['degrees Celsius', { to: { ionicStrength_M: 0.1, temperature_K: 25 } }, 'outOfDomain'], ['a negative ionic strength', { to: { ionicStrength_M: -1, temperature_K: 298.15 } }, 'outOfDomain'],
    ['a component without charge', { charges: { H: 1, Zn: 2 } }, 'missingCharge'],
  ])('refuse %s', (_, change, reason) => {
    expect(carrySpecies(species, carry(change))).toMatchObject({ ok: false, reason })
  })
})

describe('named media', () => {
  it('keep the plasma model and the published set apart, each with its assumptions and the missing solids in words', () => {
    expect(NAMED_MEDIA.map(one => [one.id, one.amountsAre])).toEqual([['plasma', 'totals'], ['selectivity', 'free']])
    for (const one of NAMED_MEDIA) expect(one.assumptions.join(' ')).toMatch(/solid|Precipitates/)
    expect(NAMED_MEDIA[1]!.amounts_M).toEqual({ Ca: 2.5e-3, Cu: 1e-6, Zn: 50e-6 })
  })

  it('say that they were edited, and take no negative amount', () => {
    const [plasma] = NAMED_MEDIA
    expect(editMedium(plasma!, { Zn: 1e-5 })).toMatchObject({ title: 'Plasma model (edited)', amounts_M: { Zn: 1e-5, Ca: 2.5e-3 } })
    for (const bad of [{ Zn: -1 }, { Zn: NaN }, { Fe: 1e-6 }] as Record<string, number>[]) expect(editMedium(plasma!, bad)).toBeNull()
  })
})

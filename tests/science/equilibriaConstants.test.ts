import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { moveToIonicStrength } from '#shared/science/equilibria/activity'
import { findMissingProtonation, findUnbalanced, reconcileForms } from '#shared/science/equilibria/checkConstants'
import { comparable, type ConstantConditions } from '#shared/science/equilibria/comparable'
import { conditionalConstant, pM } from '#shared/science/equilibria/conditional'

interface Row { ion: string, logK: number, tolerance: number }
const series = JSON.parse(readFileSync(new URL('../../fixtures/reference/equilibria/edta.json', import.meta.url), 'utf8')) as { lookedUp: Row[], fromMemory: Row[], zinc: { I_M: number, logK: number }[] }

describe('published series', () => {
  it('the lanthanide complexes of EDTA rise from 15.4 to 19.8 along the row, two tables within 0.15 of each other [review table; Martell & Smith, from memory]', () => {
    const { lookedUp, fromMemory } = series
    expect(lookedUp.length).toBeGreaterThan(12)
    expect(Math.abs(lookedUp[0]!.logK - 15.4)).toBeLessThan(0.15)
    expect(lookedUp[lookedUp.length - 1]!.logK).toBeCloseTo(19.8, 6)
    // Eu and Gd stand level in the table: the gadolinium break
    lookedUp.forEach((row, i) => { if (i > 0) expect(row.logK, row.ion).toBeGreaterThanOrEqual(lookedUp[i - 1]!.logK - 0.1) })
    for (const row of lookedUp) {
      const other = fromMemory.find(one => one.ion === row.ion)
      if (other) expect(Math.abs(row.logK - other.logK), row.ion).toBeLessThanOrEqual(row.tolerance + 0.05)
    }
  })

  it('keeps its order through the conditional constants, which all lose the same to protons', () => {
    const protonation = [10.17, 6.11, 2.68, 2.0]
    const loss = series.lookedUp.map(row => row.logK - conditionalConstant({ logK: row.logK, ligandProtonation: protonation }, 7.4).logKCond)
    loss.forEach(value => expect(value).toBeCloseTo(loss[0]!, 12))
    expect(loss[0]).toBeCloseTo(2.79, 2)
  })
})

interface Published { ligands: Record<string, { protonation: number[], logK: { Gd: { value: number } } }> }
const published = JSON.parse(readFileSync(new URL('../../fixtures/reference/stability/published.json', import.meta.url), 'utf8')) as Published

describe('pGd at pH 7.4 with 1 µM metal and 10 µM ligand', () => {
  it.each([
    ['DTPA', 19.10], ['DTPA-BMA', 15.83], ['DOTA', 18.65], ['HP-DO3A', 18.16], ['DO3A', 16.02], ['BT-DO3A', 15.57], ['EDTA', 15.51], ['DTMA', 11.58],
  ])('of %s is %f, and log K′ lies log 9 below it [computed from the published constants by the mass balance]', (ligand, value) => {
    const { protonation, logK } = published.ligands[ligand]!
    const complex = { logK: logK.Gd.value, ligandProtonation: protonation }
    // 0.02: two printed digits; log 9 holds while 1 µM of ligand is bound and 9 µM is left
    expect(Math.abs(pM(complex) - value)).toBeLessThan(0.02)
    expect(Math.abs(pM(complex) - conditionalConstant(complex, 7.4).logKCond - Math.log10(9))).toBeLessThan(1e-4)
  })
})

describe('comparability of constants', () => {
  const at = (label: string, change: Partial<ConstantConditions> = {}): ConstantConditions => ({ label, ionicStrength_M: 0.1, temperature_K: 298.15, cation: 'K', phScale: 'concentration', ...change })

  it('refuses Zn-EDTA at I = 0 and at 0.1 M in one comparison, naming both [NIST SRD 46: 18.0 and 16.5]', () => {
    const [zero, tenth] = [series.zinc.find(one => one.I_M === 0)!, series.zinc.find(one => one.I_M === 0.1)!]
    expect([zero.logK, tenth.logK]).toEqual([18, 16.5])
    const answer = comparable(series.zinc.filter(one => one.I_M <= 0.1).map(one => at(`Zn-EDTA, log K ${one.logK}`, { ionicStrength_M: one.I_M })))
    expect(answer).toMatchObject({ ok: false, reason: 'ionicStrength' })
    if (!answer.ok) expect(answer.message).toMatch(/log K 18 is for I = 0 M.*log K 16.5 for 0.1 M/)
    // Davies, Δz² = 4 − 4 − 16 = −16, explains the difference to 0.3: the medium, not the chemistry
    expect(Math.abs(moveToIonicStrength(zero.logK, -16, 0, 0.1).logBeta - tenth.logK)).toBeLessThan(0.3)
  })

  it.each<[string, Partial<ConstantConditions>, string]>([
    ['sodium with tetraalkylammonium', { cation: 'tetraalkylammonium' }, 'electrolyte'], ['25 °C with 37 °C', { temperature_K: 310.15 }, 'temperature'], ['two pH scales', { phScale: 'activity' }, 'phScale'],
  ])('refuses %s', (_, change, reason) => {
    expect(comparable([at('a', { cation: 'Na' }), at('b', { cation: 'Na', ...change })])).toMatchObject({ ok: false, reason })
  })

  it('takes 20 and 25 °C together, and 0.10 with 0.11 M', () => {
    expect(comparable([at('a'), at('b', { temperature_K: 293.15, ionicStrength_M: 0.11 })])).toEqual({ ok: true, warnings: [] })
    expect(comparable([])).toEqual({ ok: true, warnings: [] })
  })

  it('warns by name where a condition is not stated, which is not the same as equal', () => {
    const answer = comparable([at('a'), at('b', { ionicStrength_M: null, phScale: null })])
    expect(answer).toMatchObject({ ok: true, warnings: [expect.stringMatching(/Ionic strength of b/), expect.stringMatching(/pH scale of b/)] })
  })
})

describe('forms of constants', () => {
  it('are turned into each other, and agree within print when both are given', () => {
    expect(reconcileForms({ stepwise: [10, 6, 2.5] })).toMatchObject({ ok: true, overall: [10, 16, 18.5] })
    expect(reconcileForms({ overall: [10, 16, 18.5] })).toMatchObject({ ok: true, stepwise: [10, 6, 2.5] })
    expect(reconcileForms({ stepwise: [10, 6, 2.5], overall: [10.01, 16.02, 18.5] })).toMatchObject({ ok: true })
  })

  it.each([
    ['stepwise constants listed as overall ones', { stepwise: [10, 6], overall: [10, 6] }, 'contradiction'], ['lists of two lengths', { stepwise: [10, 6], overall: [10] }, 'lengthMismatch'],
    ['nothing', {}, 'missing'], ['no number', { overall: [NaN] }, 'outOfDomain'],
  ])('are refused for %s', (_, given, reason) => {
    const answer = reconcileForms(given)
    expect(answer).toMatchObject({ ok: false, reason })
    if (!answer.ok) expect(answer.accepted.length).toBeGreaterThan(10)
  })

  it('are refused where a species does not balance in charge, and named', () => {
    const charges = { Gd: 3, L: -5, H: 1 }
    const species = (charge: number) => [{ name: 'GdHL', stoichiometry: { Gd: 1, L: 1, H: 1 }, logBeta: 24, charge }]
    expect(findUnbalanced(species(-1), charges)).toBeNull()
    expect(findUnbalanced(species(-2), charges)).toMatchObject({ reason: 'unbalanced', message: expect.stringContaining('GdHL') })
    expect(findUnbalanced(species(-1), { Gd: 3, L: -5 })).toMatchObject({ reason: 'missing' })
    expect(findUnbalanced([{ name: 'GdOH', stoichiometry: { Gd: 1, H: -1 }, logBeta: -7.9, charge: 2 }], charges)).toBeNull()
  })

  it('are refused where protonation is missing that still counts at the pH of use', () => {
    expect(findMissingProtonation([], 5, 7.4)).toMatchObject({ reason: 'missing' })
    expect(findMissingProtonation(null, 5, 7.4)).toMatchObject({ reason: 'missing' })
    expect(findMissingProtonation([10.5, 8.6], 5, 7.4)).toMatchObject({ reason: 'missing', message: expect.stringContaining('2 of 5') })
    expect(findMissingProtonation([10.5, 8.6, 4.3], 5, 7.4)).toBeNull()
    expect(findMissingProtonation([10.5], 1, 14.5)).toMatchObject({ reason: 'outOfDomain' })
    expect(findMissingProtonation([], 0, 7)).toBeNull()
  })
})

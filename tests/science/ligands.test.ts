import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { compareLigands, type Candidate, type Told } from '#shared/science/ligands/compare'
import { cavity_A, denticity, donorClasses, ligandCharge, type LigandFacts } from '#shared/science/ligands/donors'
import { estimateLogK } from '#shared/science/ligands/estimate'
import { hintsFor } from '#shared/science/ligands/hints'
import { coordinationsOf, ionFacts, ionName, ionOf, IONS, ionSymbol, radius_A, type Ion } from '#shared/science/ligands/radii'
import { comparableTogether } from '#shared/science/ligands/together'
import { basicity } from '#shared/science/equilibria/protonation'
import { fitLine, lineBand } from '#shared/science/least-squares/line'

const ring: LigandFacts = { name: 'ring tetraacetate', donors: { amine: 4, carboxylate: 4 }, ringAtoms: 12 }
const ringAmide: LigandFacts = { name: 'ring tetraamide', donors: { amine: 4, amide: 4 }, ringAtoms: 12 }
const chain: LigandFacts = { name: 'chain pentaacetate', donors: { amine: 3, carboxylate: 5 }, ringAtoms: null }
const need = { coordination: 9, waters: 1 }
const hint = (ion: Ion, ligand: LigandFacts, about: string, at = need) => hintsFor(ion, ligand, at).find(one => one.about === about)!

describe('ions', () => {
  it('have the radii of Gd(III), La(III), Lu(III) and Ca(II) [Shannon 1976]', () => {
    expect([6, 8, 9].map(cn => radius_A('Gd3', cn))).toEqual([0.938, 1.053, 1.107])
    expect([6, 8, 9].map(cn => radius_A('La3', cn))).toEqual([1.032, 1.16, 1.216])
    expect(radius_A('Lu3', 9)).toBe(1.032)
    expect(radius_A('Ca2', 9)).toBe(1.18)
    expect(radius_A('Ga3', 8)).toBeNull()
  })

  it('contract along the lanthanides at every coordination number, and grow with it', () => {
    const row: Ion[] = ['La3', 'Ce3', 'Pr3', 'Nd3', 'Pm3', 'Sm3', 'Eu3', 'Gd3', 'Tb3', 'Dy3', 'Ho3', 'Er3', 'Tm3', 'Yb3', 'Lu3']
    for (const cn of [6, 8, 9]) row.forEach((ion, i) => { if (i > 0) expect(radius_A(ion, cn)).toBeLessThan(radius_A(row[i - 1]!, cn)!) })
    for (const ion of IONS) if (radius_A(ion, 8) !== null) expect(radius_A(ion, 8)).toBeGreaterThan(radius_A(ion, 6)!)
  })

  it('are all hard but copper and zinc, and every usual coordination number has facts', () => {
    expect(IONS.filter(ion => ionFacts(ion).hardness !== 'hard')).toEqual(['Cu2', 'Zn2'])
    for (const ion of IONS) expect(radius_A(ion, ionFacts(ion).usual[0]!), ion).not.toBeNull()
  })
})

describe('names of ions', () => {
  it('are one symbol each, there and back, with the charge in Roman numerals', () => {
    expect(new Set(IONS.map(ionSymbol)).size).toBe(IONS.length)
    for (const ion of IONS) expect(ionOf(ionSymbol(ion))).toBe(ion)
    expect([ionName('Gd3'), ionName('Zn2'), ionOf('Xx')]).toEqual(['Gd(III)', 'Zn(II)', null])
    expect([coordinationsOf('Gd3'), coordinationsOf('Ga3')]).toEqual([[6, 8, 9], [6]])
  })
})

describe('hints', () => {
  it('take charge and denticity as registered where groups beside the donors count, and own up to a ring or donors not known', () => {
    const registered: LigandFacts = { ...ring, charge: -5, denticity: 9, ringAtoms: 'unknown' }
    expect([ligandCharge(registered), denticity(registered)]).toEqual([-5, 9])
    expect(hint('Gd3', registered, 'charge').reason).toContain('charge −2')
    expect(hint('Gd3', registered, 'hardness').reason).toContain('1 of a class that is not known')
    expect(hint('Gd3', registered, 'size')).toMatchObject({ leaning: 'open', reason: expect.stringContaining('size of the ring is not known') })
    expect(hint('Gd3', registered, 'shape').reason).toMatch(/^A ring lets go slowly/)
  })

  it('count donors, charge and classes from the groups', () => {
    expect([denticity(ring), ligandCharge(ring), denticity(chain), ligandCharge(chain), ligandCharge(ringAmide)]).toEqual([8, -4, 8, -5, 0])
    expect(donorClasses({ name: 'x', donors: { thiolate: 2, pyridine: 1 }, ringAtoms: null })).toEqual({ hard: 0, borderline: 1, soft: 2 })
  })

  it('say that eight donors and one water fill nine sites, and how many stay open with six', () => {
    expect(hint('Gd3', ring, 'denticity')).toMatchObject({ leaning: 'for', reason: expect.stringContaining('8 donors for 8 sites') })
    const six: LigandFacts = { name: 'diamine tetraacetate', donors: { amine: 2, carboxylate: 4 }, ringAtoms: null }
    expect(hint('Gd3', six, 'denticity')).toMatchObject({ leaning: 'against', reason: expect.stringContaining('2 more sites are open') })
    expect(hint('Ga3', ring, 'denticity', { coordination: 6, waters: 0 })).toMatchObject({ leaning: 'against', reason: expect.stringContaining('stays off') })
  })

  it('hold the radius against the ring, and leave the open chain and an untabulated radius open', () => {
    expect(hint('Gd3', ring, 'size')).toMatchObject({ leaning: 'for', reason: expect.stringContaining('110.7 pm') })
    expect(hint('Ga3', ring, 'size', { coordination: 6, waters: 0 })).toMatchObject({ leaning: 'against', reason: expect.stringMatching(/smaller.*\(from memory\)\.$/) })
    expect(hint('La3', { ...ring, ringAtoms: 14 }, 'size').reason).toMatch(/larger.*can still sit above the ring\.$/)
    expect(hint('Gd3', chain, 'size').leaning).toBe('open')
    expect(hint('Ga3', ring, 'size')).toMatchObject({ leaning: 'open', reason: expect.stringContaining('No radius') })
    expect(cavity_A(13)).toBeNull()
  })

  it('put soft donors against a hard ion and a cation against a neutral complex', () => {
    expect(hint('Gd3', { name: 'x', donors: { thiolate: 4 }, ringAtoms: null }, 'hardness').leaning).toBe('against')
    expect(hint('Gd3', ring, 'hardness').leaning).toBe('for')
    expect(hint('Zn2', ring, 'hardness').leaning).toBe('for')
    expect(hint('Gd3', ringAmide, 'charge')).toMatchObject({ leaning: 'against', reason: expect.stringContaining('+3') })
    expect(hint('Gd3', { ...ring, donors: { amine: 4, carboxylate: 3, alcohol: 1 } }, 'charge').reason).toContain('neutral')
  })
})

describe('ligands side by side', () => {
  const told = (value: number, kind: Told['kind'] = '='): Told => ({ value, kind, basis: 'measured' })
  const conditions = (label: string, ionicStrength_M = 0.1) => ({ label, ionicStrength_M, temperature_K: 298.15, cation: null, phScale: null })
  const candidate = (ligand: LigandFacts, logK: number, hours: number, kind: Told['kind'] = '='): Candidate => ({
    ligand, logK: told(logK), conditions: conditions(ligand.name), acidHalfLife_h: { value: told(hours, kind), at: '2.5 M acid, 25 °C' }, formation_min: null,
  })

  it('say that a tetraamide near log K 12 lets go more slowly in acid than its tetraacetate near 26 [common practice, no source: 250 and 50 h]', () => {
    const { disagreements, entries } = compareLigands('Gd3', need, [candidate(ring, 26, 50), candidate(ringAmide, 12, 250)])
    expect(disagreements).toEqual([expect.stringMatching(/ring tetraamide holds more weakly .*12 against 26.* more slowly in acid \(250 h against 50 h/)])
    expect(entries[0]!.unknown).toEqual(['formation'])
    expect(entries[0]!.measured).toEqual(['log K 26', 'half-life in acid 50 h (2.5 M acid, 25 °C)'])
    const quick = compareLigands('Gd3', need, [candidate(ring, 26, 5 / 3600, '<'), candidate(chain, 22, 0.5)]).entries
    expect(quick.map(one => one.measured[1])).toEqual(['half-life in acid below 5 s (2.5 M acid, 25 °C)', 'half-life in acid 30 min (2.5 M acid, 25 °C)'])
  })

  it('draw no order from a bound that does not exclude the other, nor from different acids', () => {
    expect(compareLigands('Gd3', need, [candidate(ring, 26, 50), candidate(ringAmide, 12, 250, '<')]).disagreements).toEqual([])
    const elsewhere = { ...candidate(ringAmide, 12, 250), acidHalfLife_h: { value: told(250), at: '1 M acid, 25 °C' } }
    expect(compareLigands('Gd3', need, [candidate(ring, 26, 50), elsewhere]).disagreements).toEqual([])
  })

  it('refuse to hold log K of two ionic strengths against each other', () => {
    const salty = { ...candidate(ringAmide, 12, 250), conditions: conditions('tetraamide', 1) }
    expect(compareLigands('Gd3', need, [candidate(ring, 26, 50), salty])).toMatchObject({ constants: { ok: false, reason: 'ionicStrength' }, disagreements: [] })
  })
})

describe('log K from ΣpKa', () => {
  interface Published { ligands: Record<string, { protonation: number[], logK: Record<string, { value: number }> }> }
  const { ligands } = JSON.parse(readFileSync(new URL('../../fixtures/reference/stability/published.json', import.meta.url), 'utf8')) as Published
  const known = Object.entries(ligands).flatMap(([ligand, one]) => one.logK.Gd ? [{ ligand, sumPKa: basicity(one.protonation), logK: one.logK.Gd.value }] : [])

  it('is an estimate with a prediction interval wider than the band of the line [Draper & Smith]', () => {
    expect(known.length).toBeGreaterThanOrEqual(5)
    const middle = known.reduce((sum, one) => sum + one.sumPKa, 0) / known.length
    const answer = estimateLogK(known, middle)
    if (!answer.ok) throw new Error(answer.message)
    const line = fitLine({ x: known.map(one => one.sumPKa), y: known.map(one => one.logK) })
    if (!line.ok) throw new Error(line.message)
    expect(answer.basis).toBe('estimate')
    expect(answer.interval[1] - answer.logK).toBeGreaterThan(lineBand(line, middle).halfWidth!)
    expect(answer.points).toBe(known.length)
    expect(answer.warnings.some(words => words.includes('extrapolated'))).toBe(false)
    expect(estimateLogK(known, 90)).toMatchObject({ ok: true, warnings: [expect.stringContaining('extrapolated')] })
  })

  it('has the prediction interval of the closed form: t · s · √(1 + 1/n + (x − mean)²/Sxx)', () => {
    const points = [[10, 12], [14, 15.5], [18, 17], [22, 21.5], [26, 24]].map(([sumPKa, logK], i) => ({ ligand: `L${i}`, sumPKa: sumPKa!, logK: logK! }))
    const answer = estimateLogK(points, 20)
    if (!answer.ok) throw new Error(answer.message)
    // slope 0.75, intercept 4.5; residuals 0, 0.5, −1, 0.5, 0 → s² = 1.5/3; Sxx = 160; t(0.975, 3) = 3.182446
    expect(answer.slope).toBeCloseTo(0.75, 12)
    expect(answer.logK).toBeCloseTo(19.5, 12)
    expect(answer.interval[1] - answer.logK).toBeCloseTo(3.182446 * Math.sqrt(0.5) * Math.sqrt(1 + 0.2 + 4 / 160), 5)
  })

  it('is refused from three ligands, from equal sums and for a sum that is no number', () => {
    expect(estimateLogK(known.slice(0, 3), 20)).toMatchObject({ ok: false, reason: 'tooFewPoints' })
    expect(estimateLogK(known.map(one => ({ ...one, sumPKa: 20 })), 20)).toMatchObject({ ok: false, reason: 'equalX' })
    expect(estimateLogK(known, NaN)).toMatchObject({ ok: false, reason: 'notFinite' })
  })
})

describe('constants that may stand together', () => {
  const at = (label: string, ionicStrength_M: number | null, cation: 'Na' | 'K' | 'tetraalkylammonium' | null = 'K') => ({ label, ionicStrength_M, temperature_K: 298.15, cation, phScale: 'concentration' as const })

  it('are the largest set that compares, and each one left apart has its reason', () => {
    const answer = comparableTogether([at('a', 1), at('b', 0.1), at('c', 0.1), at('d', 0.11), at('e', 0.5)])
    expect(answer.inside).toEqual([1, 2, 3])
    expect(answer.outside).toEqual([{ at: 0, why: expect.stringMatching(/a for 1 M/) }, { at: 4, why: expect.stringMatching(/e for 0\.5 M/) }])
    expect(answer.warnings).toEqual([])
  })

  it('hold every pair: a chain of small steps does not stretch the set', () => {
    const answer = comparableTogether([at('a', 0.1), at('b', 0.115), at('c', 0.13)])
    expect(answer.inside).toHaveLength(2)
    expect(answer.outside).toHaveLength(1)
  })

  it('take a constant without conditions along, with a warning; sodium and tetraalkylammonium stay apart', () => {
    expect(comparableTogether([at('a', 0.1), at('b', null)])).toMatchObject({ inside: [0, 1], warnings: [expect.stringContaining('b not stated')], outside: [] })
    expect(comparableTogether([at('a', 0.1, 'Na'), at('b', 0.1, 'tetraalkylammonium'), at('c', 0.1, 'tetraalkylammonium')]).inside).toEqual([1, 2])
    expect(comparableTogether([])).toEqual({ inside: [], warnings: [], outside: [] })
  })
})

import { readFileSync } from 'node:fs'
import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { compileSystem, type EquilibriumSystem } from '#shared/science/equilibria/system'
import { sharesOf, sweepPcH } from '#shared/science/equilibria/speciation'
import { BALANCE_TOLERANCE, solveSystem } from '#shared/science/equilibria/solve'

interface Case extends EquilibriumSystem { free_M: Record<string, number> }
const file = JSON.parse(readFileSync(new URL('../../fixtures/reference/stability/speciation.json', import.meta.url), 'utf8')) as { cases: Case[] }

function solved(system: EquilibriumSystem, start?: Float64Array) {
  const compiled = compileSystem(system)
  if (!compiled.ok) throw new Error(compiled.message)
  const answer = solveSystem(compiled, start)
  if (!answer.ok) throw new Error(answer.message)
  return answer
}

const metalLigand = (logK: number, metal_M: number, ligand_M: number): EquilibriumSystem => ({
  components: [{ name: 'M', total_M: metal_M }, { name: 'L', total_M: ligand_M }],
  species: [{ name: 'ML', stoichiometry: { M: 1, L: 1 }, logBeta: logK }],
})

describe('speciation solver', () => {
  it('finds every free concentration of 48 random systems to 1e-10 [scipy.optimize.root, then mpmath at 60 digits]', () => {
    expect(file.cases.length).toBe(48)
    for (const [index, system] of file.cases.entries()) {
      const answer = solved(system)
      expect(answer.balanceError).toBeLessThanOrEqual(BALANCE_TOLERANCE)
      for (const [name, free_M] of Object.entries(system.free_M)) {
        // 1e-10: a relative balance of 1e-12 leaves ln(free) uncertain by about a hundred times that in the stiffest system
        expect(Math.abs(answer.free_M[name]! / free_M - 1), `case ${index}, ${name}`).toBeLessThan(1e-10)
      }
    }
  })

  it('keeps a tiny free metal at full precision where totals are equal and K is 1e25 [closed form: √(T/K)]', () => {
    const answer = solved(metalLigand(25, 1e-3, 1e-3))
    // the root of K x² + x − T = 0
    const exact = (2 * 1e-3) / (1 + Math.sqrt(1 + 4e25 * 1e-3))
    expect(Math.abs(answer.free_M.M! / exact - 1)).toBeLessThan(1e-11)
    expect(Math.abs(answer.free_M.L! / exact - 1)).toBeLessThan(1e-11)
  })

  it('agrees with the quadratic for 1:1 complexes over 40 decades of K [closed form]', () => {
    fc.assert(fc.property(
      fc.double({ min: -5, max: 35, noNaN: true }), fc.double({ min: -9, max: 0, noNaN: true }), fc.double({ min: -9, max: 0, noNaN: true }),
      (logK, logM, logL) => {
        const [metal, ligand, k] = [10 ** logM, 10 ** logL, 10 ** logK]
        const answer = solved(metalLigand(logK, metal, ligand))
        const b = k * (ligand - metal) + 1
        const root = Math.sqrt(b * b + 4 * k * metal)
        const free = b >= 0 ? (2 * metal) / (b + root) : (root - b) / (2 * k)
        // the quadratic itself loses digits where K·(L − M) nearly cancels: compare where it does not
        fc.pre(Math.abs(ligand - metal) > 1e-3 * Math.max(ligand, metal))
        return Math.abs(answer.free_M.M! / free - 1) < 1e-9
      },
    ), { seed: 7, numRuns: 300 })
  })

  it('gives the protonation shares of a triprotic acid when pH is held [closed form: β_j h^j over their sum]', () => {
    const logBeta = [12.35, 19.55, 21.7]
    const system = (pH: number): EquilibriumSystem => ({
      components: [{ name: 'A', total_M: 1e-3 }, { name: 'H', logFree: -pH }],
      species: logBeta.map((beta, j) => ({ name: `H${j + 1}A`, stoichiometry: { A: 1, H: j + 1 }, logBeta: beta })),
    })
    let start: Float64Array | undefined
    for (let pH = 0; pH <= 14; pH += 0.5) {
      const answer = solved(system(pH), start)
      start = answer.lnFree
      const terms = [1, ...logBeta.map((beta, j) => 10 ** (beta - (j + 1) * pH))]
      const sum = terms.reduce((a, b) => a + b, 0)
      expect(answer.free_M.A! / (1e-3 / sum)).toBeCloseTo(1, 11)
      expect(answer.species_M.H2A! / (1e-3 * terms[2]! / sum)).toBeCloseTo(1, 11)
    }
  })

  it('finds pH 7 in pure water and pH of 1 mM strong acid from a proton total of either sign [closed form]', () => {
    const water = (total_M: number): EquilibriumSystem => ({
      components: [{ name: 'H', total_M }],
      species: [{ name: 'OH', stoichiometry: { H: -1 }, logBeta: -14 }],
    })
    for (const total of [0, 1e-3, -1e-3, 1e-8]) {
      const h = solved(water(total)).free_M.H!
      const exact = total >= 0 ? (total + Math.sqrt(total * total + 4e-14)) / 2 : 2e-14 / (-total + Math.sqrt(total * total + 4e-14))
      expect(h / exact).toBeCloseTo(1, 9)
    }
  })

  it('holds every balance and stays positive whatever the order of the components [property]', () => {
    for (const system of file.cases) {
      const forward = solved(system)
      const backward = solved({ components: [...system.components].reverse(), species: [...system.species].reverse() })
      for (const name of Object.keys(system.free_M)) {
        expect(forward.free_M[name]!).toBeGreaterThan(0)
        expect(Math.abs(forward.free_M[name]! / backward.free_M[name]! - 1)).toBeLessThan(1e-10)
      }
    }
  })

  it('frees no metal when more ligand is added [monotone]', () => {
    fc.assert(fc.property(fc.double({ min: 2, max: 20, noNaN: true }), fc.double({ min: 1.01, max: 50, noNaN: true }), (logK, factor) =>
      solved(metalLigand(logK, 1e-4, 1e-4 * factor)).free_M.M! <= solved(metalLigand(logK, 1e-4, 1e-4)).free_M.M!,
    ), { seed: 11, numRuns: 100 })
  })

  it('treats a total of zero as absent, with its species at 0', () => {
    const answer = solved(metalLigand(20, 0, 1e-3))
    expect(answer.species_M.ML).toBe(0)
    expect(answer.species_M.M).toBe(0)
    expect(answer.free_M.L).toBeCloseTo(1e-3, 15)
  })

  it('refuses by value what is no system, naming the part at fault', () => {
    const base = metalLigand(5, 1, 1)
    expect(compileSystem(metalLigand(NaN, 1, 1))).toMatchObject({ ok: false, reason: 'notFinite' })
    expect(compileSystem(metalLigand(5, -1, 1))).toMatchObject({ ok: false, reason: 'negativeTotal' })
    expect(compileSystem(metalLigand(5, Infinity, 1))).toMatchObject({ ok: false, reason: 'notFinite' })
    expect(compileSystem({ ...base, species: [{ name: 'MX', stoichiometry: { X: 1 }, logBeta: 1 }] })).toMatchObject({ ok: false, reason: 'unknownComponent' })
    expect(compileSystem({ ...base, species: [{ name: 'M', stoichiometry: { M: 2 }, logBeta: 1 }] })).toMatchObject({ ok: false, reason: 'duplicateName' })
    expect(compileSystem({ ...base, species: [{ name: 'none', stoichiometry: {}, logBeta: 1 }] })).toMatchObject({ ok: false, reason: 'emptySpecies' })
  })

  it('refuses totals that no positive concentrations can meet', () => {
    const compiled = compileSystem({
      components: [{ name: 'H', total_M: -1 }, { name: 'A', total_M: 1e-3 }],
      species: [{ name: 'AH_1', stoichiometry: { A: 1, H: -1 }, logBeta: -5 }],
    })
    if (!compiled.ok) throw new Error(compiled.message)
    expect(solveSystem(compiled).ok).toBe(false)
  })
})

describe('species against pH', () => {
  const species = [
    { name: 'ML', stoichiometry: { M: 1, L: 1 }, logBeta: 17.35 },
    ...[10.17, 16.28, 18.96, 20.96].map((logBeta, j) => ({ name: `H${j + 1}L`, stoichiometry: { L: 1, H: j + 1 }, logBeta })),
  ]
  const components = [{ name: 'M', total_M: 1e-3 }, { name: 'L', total_M: 1e-3 }]
  const pcH = Array.from({ length: 29 }, (_, i) => i * 0.5)

  it('gives the same point by point as from scratch, and shares of the metal that sum to 1 [EDTA with gadolinium]', () => {
    const sweep = sweepPcH({ components, species, pcH })
    if (!sweep.ok) throw new Error(sweep.message)
    const shares = sharesOf(sweep, { M: 1, ML: 1 })
    for (const [i, one] of pcH.entries()) {
      const alone = solved({ components: [...components, { name: 'H', logFree: -one }], species })
      expect(sweep.species_M.ML![i]! / alone.species_M.ML!).toBeCloseTo(1, 10)
      expect(shares.M![i]! + shares.ML![i]!).toBeCloseTo(1, 14)
    }
    // free in strong acid, bound from pH 4 on
    expect(shares.M![0]!).toBeGreaterThan(0.9)
    expect(shares.ML![8]!).toBeGreaterThan(0.99)
  })

  it('refuses a system that is none', () => {
    expect(sweepPcH({ components, species: [{ name: 'ML', stoichiometry: { X: 1 }, logBeta: 1 }], pcH })).toMatchObject({ ok: false, reason: 'unknownComponent' })
  })
})

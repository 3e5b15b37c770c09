import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { boundInPlasma, type AgentConstants } from '#shared/science/equilibria/boundInPlasma'
import { conditionalConstant, unboundMetal_M } from '#shared/science/equilibria/conditional'
import { PLASMA_ASSUMPTIONS, PLASMA_SPECIES, PLASMA_TOTALS, type PlasmaTotals } from '#shared/science/equilibria/media'
import { SELECTIVITY_COMPETITORS_M } from '#shared/science/equilibria/selectivity'
import { solveSystem } from '#shared/science/equilibria/solve'
import { compileSystem } from '#shared/science/equilibria/system'

interface Figure { value: number }
const published = JSON.parse(readFileSync(new URL('../../fixtures/reference/stability/published.json', import.meta.url), 'utf8')) as {
  ligands: Record<string, { protonation: number[], logK: Record<string, Figure> }>
}
const agentOf = (ligand: string): AgentConstants => {
  const { logK, protonation } = published.ligands[ligand]!
  return { logK: logK.Gd!.value, ligandProtonation: protonation, logKCompetitors: { Ca: logK.Ca!.value, Zn: logK.Zn!.value, Cu: logK.Cu!.value } }
}
const plasma = { totals: PLASMA_TOTALS, pcH: 7.4, agent_mM: 0.4 }
const bound = (agent: AgentConstants, conditions = plasma) => {
  const answer = boundInPlasma(agent, conditions)
  if (!answer.ok) throw new Error(answer.message)
  return answer
}
const nothing: PlasmaTotals = { ca_mM: 0, mg_mM: 0, zn_uM: 0, cu_uM: 0, phosphate_mM: 0, carbonate_mM: 0, citrate_mM: 0, lactate_mM: 0, histidine_mM: 0, albumin_mM: 0 }

describe('plasma model', () => {
  it('keeps free zinc near a nanomole per litre though 15 µM are exchangeable [about 1 nM in plasma, from memory]', () => {
    const held = [{ name: 'H', logFree: -7.4 }]
    const amounts = { Ca: 2.5e-3, Mg: 0.8e-3, Zn: 15e-6, Cu: 1e-6, PO4: 1.1e-3, CO3: 25e-3, Cit: 0.11e-3, Lac: 1.5e-3, His: 0.08e-3, Alb: 0.63e-3, Ln: 0 }
    const compiled = compileSystem({ components: [...held, ...Object.entries(amounts).map(([name, total_M]) => ({ name, total_M }))], species: PLASMA_SPECIES.filter(s => s.name !== 'OH') })
    if (!compiled.ok) throw new Error(compiled.message)
    const answer = solveSystem(compiled)
    if (!answer.ok) throw new Error(answer.message)
    expect(answer.free_M.Zn!).toBeGreaterThan(0.3e-9)
    expect(answer.free_M.Zn!).toBeLessThan(5e-9)
    // ionised calcium of plasma is 1.2 mM; without albumin's weak sites the model lies above, as it says
    expect(answer.free_M.Ca!).toBeGreaterThan(1.2e-3)
    expect(answer.free_M.Ca!).toBeLessThan(2.3e-3)
  })

  it('falls back on the 1:1 mass balance when nothing competes [closed form]', () => {
    for (const ligand of ['DTPA-BMA', 'DTMA']) {
      const agent = { ...agentOf(ligand), logKCompetitors: {} }
      const { logKCond } = conditionalConstant({ ...agent, metalHydroxide: [-7.9] }, 7.4)
      const exact = 1 - unboundMetal_M(10 ** logKCond, 4e-4, 4e-4) / 4e-4
      expect(bound(agent, { ...plasma, totals: nothing }).bound_frac).toBeCloseTo(exact, 11)
    }
  })

  it('lets a tetraamide with log K 12.8 lose most of its metal at equilibrium and DTPA almost none', () => {
    expect(bound(agentOf('DTMA')).bound_frac).toBeLessThan(0.5)
    expect(bound(agentOf('DTPA')).bound_frac).toBeGreaterThan(0.99)
  })

  it('accounts for the whole ligand: lanthanide, competitors and free forms sum to 1', () => {
    for (const ligand of ['DTPA', 'DTPA-BMA', 'DOTA', 'HP-DO3A', 'DTMA']) {
      const shares = bound(agentOf(ligand)).ligandShare
      expect(Object.values(shares).reduce((a, b) => a + b, 0)).toBeCloseTo(1, 10)
    }
  })

  it('binds more when log K is higher and less when there is more zinc [monotone]', () => {
    const base = agentOf('DTPA-BMA')
    expect(bound({ ...base, logK: base.logK + 1 }).bound_frac).toBeGreaterThan(bound(base).bound_frac)
    expect(bound(base, { ...plasma, totals: { ...PLASMA_TOTALS, zn_uM: 150 } }).bound_frac).toBeLessThan(bound(base).bound_frac)
  })

  it('is an upper bound that names the competitors without a constant', () => {
    const answer = bound({ ...agentOf('DTPA'), logKCompetitors: { Ca: 10.75 } })
    expect(answer).toMatchObject({ kind: '<', leftOut: ['Mg', 'Zn', 'Cu'] })
    expect(answer.bound_frac).toBeGreaterThan(bound(agentOf('DTPA')).bound_frac)
  })

  it('says that the lanthanide phosphate it leaves out would be oversaturated', () => {
    expect(bound(agentOf('DTPA')).phosphateOversaturation_decades).toBeGreaterThan(0)
    expect(PLASMA_ASSUMPTIONS.some(text => text.includes('Iron is left out'))).toBe(true)
    expect(PLASMA_ASSUMPTIONS.some(text => text.includes('Precipitates'))).toBe(true)
  })

  it('is kept apart from the competitor set of the published selectivity constant', () => {
    expect(SELECTIVITY_COMPETITORS_M).toEqual({ Ca: 2.5e-3, Cu: 1e-6, Zn: 50e-6 })
    expect(PLASMA_TOTALS.zn_uM).toBe(15)
  })

  it('refuses an agent that is not there and constants that are no numbers', () => {
    expect(boundInPlasma(agentOf('DTPA'), { ...plasma, agent_mM: 0 })).toMatchObject({ ok: false, reason: 'badInput' })
    expect(boundInPlasma({ ...agentOf('DTPA'), logK: NaN }, plasma)).toMatchObject({ ok: false, reason: 'badInput' })
  })
})

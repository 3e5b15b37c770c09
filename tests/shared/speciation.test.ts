import { describe, expect, it } from 'vitest'
import type { SpeciationSystemDto } from '../../shared/schemas/stability'
import { boundInPlasma } from '../../shared/science/equilibria/boundInPlasma'
import { conditionalConstant, pM } from '../../shared/science/equilibria/conditional'
import { PLASMA_TOTALS } from '../../shared/science/equilibria/media'
import { overallFromStepwise } from '../../shared/science/equilibria/protonation'
import { FLASK, MEDIA, sharedComponents, speciate, speciationAt, speciesFigure, type SpeciationAmounts, type SpeciationPoint } from '../../shared/stability/speciation'
import { PUBLISHED } from '../support/publishedRecords'

const { logK, protonation, competitors } = PUBLISHED.dtpaBma

/** As the server hands it over, without hydroxides of the metal unless named. */
function system(metalHydroxide: number[] = []): SpeciationSystemDto {
  return {
    metal: 'Gd', logK, ligandProtonation: protonation, complexProtonation: [], complexHydroxide: [], metalHydroxide, competitors: Object.keys(competitors), notes: [],
    species: [
      ...overallFromStepwise(protonation).map((logBeta, j) => ({ name: `H${j + 1}L`, stoichiometry: { L: 1, H: j + 1 }, logBeta, evidenceId: 'a' })),
      { name: 'LnL', stoichiometry: { Ln: 1, L: 1 }, logBeta: logK, evidenceId: 'a' },
      ...metalHydroxide.map(logBeta => ({ name: 'Ln(OH)', stoichiometry: { Ln: 1, H: -1 }, logBeta, evidenceId: null })),
      ...Object.entries(competitors).map(([metal, logBeta]) => ({ name: `${metal}L`, stoichiometry: { [metal]: 1, L: 1 }, logBeta, evidenceId: 'b' })),
    ],
  }
}
const flask = (more: Partial<SpeciationAmounts> = {}): SpeciationAmounts => ({ mediumId: FLASK, metal_mM: 1, ligand_mM: 1, others_M: {}, ...more })
function at(one: SpeciationSystemDto, amounts: SpeciationAmounts, pH: number, component = 'Ln'): SpeciationPoint {
  const point = speciationAt(one, amounts, { pH, component })
  if ('ok' in point) throw new Error(point.message)
  return point
}

describe('species of an agent at chosen amounts', () => {
  it('hold in the plasma medium what the placement says stays bound, by another way to the solution', () => {
    const plasma = MEDIA.find(one => one.id === 'plasma')!
    const point = at(system([-7.9]), { mediumId: 'plasma', metal_mM: 0.4, ligand_mM: 0.4, others_M: plasma.amounts_M }, 7.4)
    const bound = boundInPlasma({ logK, ligandProtonation: protonation, logKCompetitors: competitors }, { totals: PLASMA_TOTALS, pcH: 7.4, agent_mM: 0.4 })
    if (!bound.ok) throw new Error(bound.message)
    expect(point.shares.find(one => one.name === 'GdL')!.share).toBeCloseTo(bound.bound_frac, 9)
    expect(point.pMetal).toBeCloseTo(bound.pMetal, 7)
  })

  it('give pGd 15.83 at 1 µM metal and 10 µM ligand [Cacheris et al. 1990]', () => {
    const point = at(system(), flask({ metal_mM: 1e-3, ligand_mM: 1e-2 }), 7.4)
    expect(point.pMetal).toBeCloseTo(15.8, 1)
    expect(point.pMetal).toBeCloseTo(pM({ logK, ligandProtonation: protonation }), 9)
  })

  it('add up to the whole of what is asked for, for each component', () => {
    const amounts = flask({ others_M: { Zn: 1e-4 } })
    expect(sharedComponents(system(), amounts)).toEqual(['Ln', 'L', 'Zn'])
    for (const component of ['Ln', 'L', 'Zn']) expect(at(system([-7.9]), amounts, 5.3, component).shares.reduce((sum, one) => sum + one.share, 0)).toBeCloseTo(1, 5)
  })

  it('take metal hydroxide into the conditional constant [closed form: log α_M = log(1 + *β/[H])]', () => {
    const point = at(system([-7.9]), flask(), 7.9)
    expect(point.logAlphaMetal).toBeCloseTo(Math.log10(2), 12)
    expect(point.logKCond).toBeCloseTo(conditionalConstant({ logK, ligandProtonation: protonation }, 7.9).logKCond - Math.log10(2), 12)
  })

  it('hold competitors of the published selectivity set at their free concentrations', () => {
    const set = MEDIA.find(one => one.id === 'selectivity')!
    const free = at(system(), { mediumId: 'selectivity', metal_mM: 1e-3, ligand_mM: 1, others_M: set.amounts_M }, 7.4, 'L')
    const ratio = free.shares.find(one => one.name === 'ZnL')!.share / free.shares.find(one => one.name === 'CaL')!.share
    expect(ratio).toBeCloseTo(10 ** (competitors.Zn! - competitors.Ca!) * 50e-6 / 2.5e-3, 6)
  })

  it('are drawn with the cursor, as lines or stacked to 100 %, and as a table', () => {
    const amounts = flask({ others_M: { Zn: 1e-4 } })
    const path = speciate(system([-7.9]), amounts)
    if (!path.ok) throw new Error(path.message)
    const input = { system: system([-7.9]), amounts, path, component: 'Ln', at: at(system([-7.9]), amounts, 7.4), code: 'SK-01' }
    const lines = speciesFigure({ ...input, as: 'lines' })
    expect(lines.layers.filter(layer => layer.type === 'line').map(layer => layer.name)).toEqual(expect.arrayContaining(['GdL', 'free Gd']))
    expect(lines.layers).toContainEqual(expect.objectContaining({ type: 'rule', at: 7.4 }))
    expect(lines.caption).toMatch(/Gd 1 mM, ligand 1 mM, Zn 0\.1 mM.*Precipitation is not modelled/)
    const bands = speciesFigure({ ...input, as: 'stacked' }).layers.filter(layer => layer.type === 'band')
    for (const point of bands.at(-1)!.points) expect(point.high).toBeGreaterThan(98)
    expect(lines.table!.rows).toHaveLength(23)
  })

  it('say what would be accepted where an amount is none', () => {
    expect(speciate(system(), flask({ metal_mM: 0 }))).toMatchObject({ ok: false, accepted: 'more than 0 of both' })
    expect(speciate(system(), flask({ others_M: { Zn: Number.NaN } }))).toMatchObject({ ok: false, message: 'The amount of Zn is no concentration.' })
    expect(speciationAt(system(), flask({ ligand_mM: -1 }), { pH: 7, component: 'Ln' })).toMatchObject({ ok: false, accepted: '0 to 10 mol/L' })
  })
})

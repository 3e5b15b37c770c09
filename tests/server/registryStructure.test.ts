import { describe, expect, it } from 'vitest'
import { AppError } from '../../shared/errors'
import { proposeFromSmiles } from '../../server/services/proposeFromSmiles'

const DOTA = 'OC(=O)CN1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1'
const DTPA = 'OC(=O)CN(CCN(CC(O)=O)CC(O)=O)CCN(CC(O)=O)CC(O)=O'
const DTPA_BMA = 'CNC(=O)CN(CCN(CC(O)=O)CC(O)=O)CCN(CC(O)=O)CC(=O)NC'
const HP_DO3A = 'CC(O)CN1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1'
const PCTA = 'OC(=O)CN1CCN(CC(O)=O)Cc2cccc(n2)CN(CC(O)=O)CC1'
const DOTP = 'OP(=O)(O)CN1CCN(CP(=O)(O)O)CCN(CP(=O)(O)O)CCN(CP(=O)(O)O)CC1'

describe('what a SMILES says of a ligand', () => {
  it.each([
    ['DOTA', DOTA, 8, -4, 'ring', 12], ['DTPA', DTPA, 8, -5, 'openChain', null], ['DTPA-BMA', DTPA_BMA, 8, -3, 'openChain', null],
    ['HP-DO3A', HP_DO3A, 8, -3, 'ring', 12], ['a pyridine-fused ring', PCTA, 7, -3, 'ring', 12], ['DOTP', DOTP, 8, -8, 'ring', 12],
  ] as const)('proposes denticity, charge and topology of %s [coordination chemistry textbooks]', (_, smiles, denticity, charge, topology, ringSize) => {
    const found = proposeFromSmiles(smiles)
    expect(found).toMatchObject({ denticity, deprotonatedCharge: charge, topology })
    if (topology === 'openChain') expect(found.ringSize).toBeNull()
    else if (smiles !== PCTA) expect(found.ringSize).toBe(ringSize)
    else expect(found.ringSize).toBeGreaterThanOrEqual(9)
  })

  it('gives the molar mass of DOTA, 404.42 g/mol, and of its tetraanion [IUPAC atomic masses]', () => {
    const found = proposeFromSmiles(DOTA)
    expect(found.formula).toBe('C16H28N4O8')
    expect(found.molarMass_g_per_mol).toBeCloseTo(404.42, 1)
    expect(found.deprotonatedMass_g_per_mol).toBeCloseTo(404.42 - 4 * 1.008, 1)
  })

  it('reads an ionised ligand as the same donor set [closed form]', () => {
    const ionised = proposeFromSmiles(DOTA.replaceAll('OC(=O)', '[O-]C(=O)').replaceAll('C(O)=O', 'C([O-])=O'))
    expect(ionised).toMatchObject({ denticity: 8, chargeAsDrawn: -4, deprotonatedCharge: -4 })
  })

  it('names the donor groups: three amines, three carboxylates and two amide oxygens in the bisamide [coordination chemistry textbooks]', () => {
    const { donors } = proposeFromSmiles(DTPA_BMA)
    expect(Object.fromEntries(donors.map(({ kind, count }) => [kind, count]))).toEqual({ 'amine N': 3, 'amide O': 2, 'carboxylate O': 3 })
  })

  it('draws every atom inside the picture with the metal in the middle of the ring', () => {
    const { drawing } = proposeFromSmiles(DOTA)
    expect(drawing.atoms).toHaveLength(28)
    for (const { x, y } of drawing.atoms) {
      expect(x).toBeGreaterThan(0); expect(x).toBeLessThan(drawing.width)
      expect(y).toBeGreaterThan(0); expect(y).toBeLessThan(drawing.height)
    }
    expect(drawing.metalAt).not.toBeNull()
    const nearest = Math.min(...drawing.atoms.map(({ x, y }) => Math.hypot(x - drawing.metalAt!.x, y - drawing.metalAt!.y)))
    expect(nearest).toBeGreaterThan(1)
  })

  it.each([['C1CC(', 'open ring'], ['', 'empty'], ['not a smiles', 'words'], ['[Gd+3]', 'a metal'], ['C'.repeat(300), 'too many atoms']])('refuses %s (%s) and says what is accepted', (smiles) => {
    const act = () => proposeFromSmiles(smiles)
    expect(act).toThrow(AppError)
    try { act() }
    catch (error) { expect((error as AppError).details).toMatchObject({ field: 'smiles', accepted: expect.stringMatching(/\w/) as string }) }
  })
})

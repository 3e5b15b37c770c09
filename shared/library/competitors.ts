import type { LigandPayload } from '../schemas/ligand'
import { donors, fromMemory, type LibraryConstant, type LibraryLigand } from './define'

/** Small ligands of blood that compete for the metal, without transferrin. Rounded to what the plasma model uses, good to about 0.3, with lanthanides to about 0.7. */
const PLASMA = fromMemory('May, Linder, Williams, J. Chem. Soc., Dalton Trans. 588 (1977) and tables', { note: 'Rounded for 37 °C and I = 0.15 M; transferrin is not in the set.' })
const payload = (one: Pick<LigandPayload, 'name' | 'smiles' | 'denticity' | 'charge' | 'donors'> & { steps: readonly number[] }): LigandPayload => ({
  name: one.name, smiles: one.smiles, denticity: one.denticity, charge: one.charge, donors: one.donors, topology: 'openChain', note: null,
  protonation: { stepwiseLogK: one.steps.map(value => ({ value, se: null })), temperature_K: 310.15, ionicStrength_M: 0.15, medium: 'notStated', source: `${PLASMA.citation}. Rounded, from memory.` },
})
const at37 = (ion: LibraryConstant['ion'], logK: number): LibraryConstant => ({ ion, logK, temperature_K: 310.15, ionicStrength_M: 0.15, medium: 'notStated', source: PLASMA })

export const COMPETITORS: readonly LibraryLigand[] = [
  {
    key: 'citrate', code: 'Citrate', records: [], constants: [at37('Gd3', 7.8), at37('Ca2', 3.5), at37('Mg2', 3.4), at37('Zn2', 4.8), at37('Cu2', 5.9)],
    payload: payload({ name: 'citrate', smiles: 'OC(=O)CC(O)(CC(O)=O)C(O)=O', donors: donors({ 'carboxylate O': 3 }), denticity: 3, charge: -3, steps: [5.6, 4.3, 2.9] }),
  },
  {
    key: 'carbonate', code: 'Carbonate', records: [], constants: [at37('Gd3', 6)],
    payload: payload({ name: 'carbonate', smiles: 'OC(O)=O', donors: donors({ 'carboxylate O': 1 }), denticity: 1, charge: -2, steps: [9.8, 6.1] }),
  },
  {
    key: 'phosphate', code: 'Phosphate', records: [], constants: [],
    payload: payload({ name: 'phosphate', smiles: 'OP(O)(O)=O', donors: donors({ 'phosphonate O': 1 }), denticity: 1, charge: -3, steps: [11.6, 6.6, 2] }),
  },
  {
    key: 'lactate', code: 'Lactate', records: [], constants: [at37('Gd3', 2.7), at37('Ca2', 1.1), at37('Mg2', 0.9)],
    payload: payload({ name: 'lactate', smiles: 'CC(O)C(O)=O', donors: donors({ 'carboxylate O': 1 }), denticity: 1, charge: -1, steps: [3.7] }),
  },
  {
    key: 'histidine', code: 'Histidine', records: [], constants: [at37('Zn2', 6.5), at37('Cu2', 10.1)],
    payload: payload({ name: 'histidinate', smiles: 'NC(Cc1c[nH]cn1)C(O)=O', donors: donors({ 'amine N': 1, 'pyridine N': 1, 'carboxylate O': 1 }), denticity: 3, charge: -1, steps: [8.9, 6, 1.7] }),
  },
]

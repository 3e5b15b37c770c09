import type { LigandPayload } from '../schemas/ligand'
import type { Ion } from '../science/ligands/radii'
import { acidAt25, donors, fromMemory, lookedUp, practiceHalfLife, practiceLogK, rateLawAt25, thermoAt25, zincAt37, type LibraryConstant, type LibraryLigand, type ThermoParts } from './define'

const DOTA_STEPS = [12.09, 9.68, 4.55, 4.13]
const HP_STEPS = [11.96, 9.43, 4.3, 3.26]
const BUTROL_STEPS = [11.75, 9.23, 4.17, 3.05]
const DO3A_STEPS = [11.59, 9.24, 4.43, 3.48]
const METHYLAMIDE_STEPS = [9.56, 5.95]
const AMIDE_STEPS = [9.08, 6.44]
const NOTA_STEPS = [13.17, 5.74, 3.22]
const TWO_MEDIA = 'The source used 0.1 M KCl and 0.1 M NMe_4Cl; which goes with which constant is not stated here. Published log K of this gadolinium complex spread from 21.1 to 25.3 with the medium.'
const CONDITIONS_OPEN = 'Ionic strength of 0.1 to 1 M; the electrolyte is not stated here. pH 0 to 1 is 1 to 0.1 M acid.'
const WANG = 'Wang, Jin, Comblin, Lopez-Mut, Merciny, Desreux, Inorg. Chem. 31, 1095 (1992)'
const TRADE = 'As the trade puts it: log K about 12 for the tetraamide and 26 for the parent, half-life in strong acid about 250 h and 50 h. Neither acid, temperature nor medium goes with the figures.'
const rate = (k1_per_M_s: number, citation: string, note = '') => rateLawAt25({ constants: { k1_per_M_s }, pH: [0, 1], medium: 'notStated', note: `${CONDITIONS_OPEN}${note ? ` ${note}` : ''}`, source: fromMemory(citation) })
const gadolinium = (parts: Omit<ThermoParts, 'source'> & { citation: string, lookedUpToo?: string }) =>
  thermoAt25('Gd', { ...parts, source: fromMemory(parts.citation, parts.lookedUpToo ? { note: parts.lookedUpToo } : {}) })
const at25 = (ion: Ion, logK: number, source: LibraryConstant['source']): LibraryConstant => ({ ion, logK, temperature_K: 298.15, ionicStrength_M: 0.1, medium: 'notStated', source })
const payload = (one: Omit<LigandPayload, 'topology' | 'note' | 'protonation'> & { steps: readonly number[], medium: string, from: string }): LigandPayload => ({
  name: one.name, smiles: one.smiles, donors: one.donors, denticity: one.denticity, charge: one.charge, topology: 'ring', note: null,
  protonation: { stepwiseLogK: one.steps.map(value => ({ value, se: null })), temperature_K: 298.15, ionicStrength_M: 0.1, medium: one.medium, source: `${one.from}. From memory.` },
})
const TRIACETATE = 'Inorg. Chem. 32, 587 (1993); Inorg. Chem. 34, 6472 (1995)'
const CLARKE = 'Clarke, Martell, Inorg. Chim. Acta 190, 27 and 37 (1991)'
const TOTH = 'Tóth, Király, Platzek, Radüchel, Brücher, Inorg. Chim. Acta 249, 191 (1996)'
const BIANCHI = 'Bianchi et al., J. Chem. Soc., Dalton Trans. 697 (2000)'
const MAUMELA = 'Maumela et al., J. Am. Chem. Soc. 117, 6698 (1995); Baranyai et al. (2007)'
const NINE = 'Clarke, Martell (1991); Bevilacqua et al., Inorg. Chem. 26, 2699 (1987); Cortes et al. (1990)'
const SRD = lookedUp('NIST SRD 46')

export const RINGS: readonly LibraryLigand[] = [
  {
    key: 'tetraazacyclododecane-tetraacetate', code: 'DOTA',
    payload: payload({ name: '1,4,7,10-tetraazacyclododecane-1,4,7,10-tetraacetate', smiles: 'OC(=O)CN1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1', donors: donors({ 'amine N': 4, 'carboxylate O': 4 }), denticity: 8, charge: -4, steps: DOTA_STEPS, medium: 'notStated', from: CLARKE }),
    records: [
      gadolinium({ logK: 24.67, protonation: DOTA_STEPS, competitors: { Ca: 17.23, Zn: 21.05, Cu: 22.25, Fe: 29.4 }, medium: 'notStated', note: TWO_MEDIA, citation: CLARKE, lookedUpToo: 'Log K of iron(III) was looked up (NIST SRD 46).' }),
      rate(2e-5, WANG, 'Published values run from 1.8 × 10^-6 to 2.0 × 10^-5: half-lives in 1 M acid of 107 to 10 h.'),
      acidAt25('=', 338, 'h'), zincAt37(0.99, null), practiceLogK(26, TRADE), practiceHalfLife(50, TRADE),
    ],
    constants: [],
  },
  {
    key: 'hydroxypropyl-triacetate', code: 'HP-DO3A',
    payload: payload({ name: '10-(2-hydroxypropyl)-1,4,7,10-tetraazacyclododecane-1,4,7-triacetate', smiles: 'CC(O)CN1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1', donors: donors({ 'amine N': 4, 'hydroxyl O': 1, 'carboxylate O': 3 }), denticity: 8, charge: -3, steps: HP_STEPS, medium: 'NMe4Cl', from: TRIACETATE }),
    records: [
      gadolinium({ logK: 23.8, protonation: HP_STEPS, competitors: { Ca: 14.83, Zn: 19.37, Cu: 22.84 }, medium: 'NMe4Cl', citation: TRIACETATE }),
      rate(2.6e-4, 'Inorg. Chem. 32, 587 (1993)', 'The half-life of 3.9 h in 0.1 M acid corresponds to 4.9 × 10^-4: sources differ by two.'), acidAt25('=', 3.9, 'h'), zincAt37(0.99, null),
    ],
    constants: [],
  },
  {
    key: 'butrol-triacetate', code: 'BT-DO3A',
    payload: payload({ name: '10-(2,3-dihydroxy-1-(hydroxymethyl)propyl)-1,4,7,10-tetraazacyclododecane-1,4,7-triacetate', smiles: 'OCC(C(O)CO)N1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1', donors: donors({ 'amine N': 4, 'hydroxyl O': 1, 'carboxylate O': 3 }), denticity: 8, charge: -3, steps: BUTROL_STEPS, medium: 'notStated', from: TOTH }),
    records: [gadolinium({ logK: 20.8, protonation: BUTROL_STEPS, competitors: { Ca: 12.1, Zn: 19, Cu: 21.1 }, medium: 'notStated', citation: TOTH }), rate(2.8e-5, TOTH), acidAt25('=', 43, 'h'), zincAt37(0.99, null)],
    constants: [],
  },
  {
    key: 'triacetate', code: 'DO3A',
    payload: payload({ name: '1,4,7,10-tetraazacyclododecane-1,4,7-triacetate', smiles: 'OC(=O)CN1CCNCCN(CC(O)=O)CCN(CC(O)=O)CC1', donors: donors({ 'amine N': 4, 'carboxylate O': 3 }), denticity: 7, charge: -3, steps: DO3A_STEPS, medium: 'NMe4Cl', from: TRIACETATE }),
    records: [gadolinium({ logK: 21.1, protonation: DO3A_STEPS, competitors: { Ca: 11.74, Zn: 19.26, Cu: 22.87 }, medium: 'NMe4Cl', citation: TRIACETATE }), rate(0.023, 'Inorg. Chem. 32, 587 (1993)', 'Printed as 0.023 to 0.027.')],
    constants: [],
  },
  {
    key: 'tetrakis-methylamide', code: 'DTMA',
    payload: payload({ name: '1,4,7,10-tetraazacyclododecane-1,4,7,10-tetrakis(N-methylacetamide)', smiles: 'CNC(=O)CN1CCN(CC(=O)NC)CCN(CC(=O)NC)CCN(CC(=O)NC)CC1', donors: donors({ 'amine N': 4, 'amide O': 4 }), denticity: 8, charge: 0, steps: METHYLAMIDE_STEPS, medium: 'NMe4Cl', from: BIANCHI }),
    records: [gadolinium({ logK: 12.8, protonation: METHYLAMIDE_STEPS, competitors: { Ca: 10.11, Zn: 13.66, Cu: 14.61 }, medium: 'NMe4Cl', citation: BIANCHI })],
    constants: [],
  },
  {
    key: 'tetraamide', code: 'DOTAM',
    payload: payload({ name: '1,4,7,10-tetraazacyclododecane-1,4,7,10-tetraacetamide', smiles: 'NC(=O)CN1CCN(CC(N)=O)CCN(CC(N)=O)CCN(CC(N)=O)CC1', donors: donors({ 'amine N': 4, 'amide O': 4 }), denticity: 8, charge: 0, steps: AMIDE_STEPS, medium: 'notStated', from: MAUMELA }),
    records: [
      gadolinium({ logK: 13.12, protonation: AMIDE_STEPS, competitors: { Ca: 10.32, Zn: 13.77, Cu: 14.5 }, medium: 'notStated', note: 'The sources used ionic strengths of 0.1 to 1 M; 0.1 M is written here.', citation: MAUMELA }),
      practiceLogK(12, TRADE), practiceHalfLife(250, TRADE),
    ],
    constants: [],
  },
  {
    key: 'triazacyclononane-triacetate', code: 'NOTA',
    payload: payload({ name: '1,4,7-triazacyclononane-1,4,7-triacetate', smiles: 'OC(=O)CN1CCN(CC(O)=O)CCN(CC(O)=O)CC1', donors: donors({ 'amine N': 3, 'carboxylate O': 3 }), denticity: 6, charge: -3, steps: NOTA_STEPS, medium: 'notStated', from: NINE }),
    records: [gadolinium({ logK: 14.3, protonation: NOTA_STEPS, competitors: { Ca: 8.92, Zn: 18.3, Cu: 21.63, Fe: 28 }, medium: 'notStated', citation: NINE, lookedUpToo: 'Log K of iron(III) was looked up (NIST SRD 46).' })],
    constants: [at25('Ga3', 30.98, fromMemory(NINE)), at25('In3', 26.2, fromMemory(NINE)), at25('Fe3', 28, SRD)],
  },
]

import { METALS, type Metal } from '../schemas/metal'
import { acidAt25, donors, fromMemory, lookedUp, rateLawAt25, thermoAt25, zincAt37, type LibraryLigand } from './define'

const EDTA_STEPS = [10.17, 6.11, 2.68, 2]
const DTPA_STEPS = [10.49, 8.6, 4.28, 2.64, 2]
const EDTA_OTHERS = { Ca: 10.61, Zn: 16.44, Cu: 18.78 }
const DTPA_OTHERS = { Ca: 10.75, Zn: 18.7, Cu: 21.38, Fe: 28 }
/** La, Ce … Lu, in the order of METALS. */
const EDTA_SERIES = [15.36, 15.93, 16.3, 16.51, 17.06, 17.25, 17.35, 17.87, 18.3, 18.56, 18.89, 19.32, 19.49, 19.74]
const DTPA_SERIES = [19.48, 20.5, 21.07, 21.6, 22.34, 22.39, 22.46, 22.71, 22.82, 22.78, 22.74, 22.72, 22.62, 22.44]
const EDTA_SOURCE = fromMemory('Martell and Smith, Critical Stability Constants; NIST SRD 46', { note: 'Log K of lanthanum was looked up; the series agrees within 0.15 with a looked-up review table.' })
const DTPA_SOURCE = fromMemory('Moeller, Thompson, J. Inorg. Nucl. Chem. 24, 499 (1962); competitors: Cacheris, Quay, Rocklage, Magn. Reson. Imaging 8, 467 (1990)', { note: 'Log K of lanthanum and of iron(III) were looked up (NIST SRD 46).' })
const BMA_STEPS = [9.37, 4.38, 3.31]
const CACHERIS = 'Cacheris, Quay, Rocklage, Magn. Reson. Imaging 8, 467 (1990)'
const series = (values: readonly number[], of: (metal: Metal, logK: number) => LibraryLigand['records'][number]) => METALS.map((metal, k) => of(metal, values[k]!))
const textbook = (ion: 'Fe3' | 'Mn2' | 'Mg2' | 'Al3' | 'In3' | 'Ga3' | 'Sc3' | 'Y3', logK: number) => ({
  ion, logK, temperature_K: 293.15, ionicStrength_M: 0.1, medium: 'notStated', source: lookedUp('Table of a text on pharmaceutical analytical chemistry, one decimal, after Schwarzenbach'),
})
const protonation = (steps: readonly number[], medium: string, source: string) => ({ stepwiseLogK: steps.map(value => ({ value, se: null })), temperature_K: 298.15, ionicStrength_M: 0.1, medium, source })

export const OPEN_CHAINS: readonly LibraryLigand[] = [
  {
    key: 'ethylenediaminetetraacetate', code: 'EDTA',
    payload: {
      name: 'ethylenediaminetetraacetate', smiles: 'OC(=O)CN(CCN(CC(O)=O)CC(O)=O)CC(O)=O', donors: donors({ 'amine N': 2, 'carboxylate O': 4 }), denticity: 6, topology: 'openChain', charge: -4,
      protonation: protonation(EDTA_STEPS, 'KCl', 'Martell and Smith; Cacheris et al. 1990. From memory.'), note: null,
    },
    records: series(EDTA_SERIES, (metal, logK) => thermoAt25(metal, { logK, protonation: EDTA_STEPS, competitors: EDTA_OTHERS, medium: 'KCl', source: EDTA_SOURCE })),
    constants: [textbook('Fe3', 25.1), textbook('Mn2', 13.8), textbook('Mg2', 8.7), textbook('Al3', 16.3), textbook('In3', 24.9), textbook('Ga3', 20.5), textbook('Sc3', 23.1), textbook('Y3', 18.2)],
  },
  {
    key: 'diethylenetriaminepentaacetate', code: 'DTPA',
    payload: {
      name: 'diethylenetriaminepentaacetate', smiles: 'OC(=O)CN(CCN(CC(O)=O)CC(O)=O)CCN(CC(O)=O)CC(O)=O', donors: donors({ 'amine N': 3, 'carboxylate O': 5 }), denticity: 8, topology: 'openChain', charge: -5,
      protonation: protonation(DTPA_STEPS, 'notStated', 'Cacheris et al. 1990; Martell and Smith. From memory.'), note: null,
    },
    records: [
      ...series(DTPA_SERIES, (metal, logK) => thermoAt25(metal, { logK, protonation: DTPA_STEPS, competitors: DTPA_OTHERS, medium: 'notStated', source: DTPA_SOURCE })),
      rateLawAt25({ constants: { k1_per_M_s: 0.58, kZn_per_M_s: 0.056, kCu_per_M_s: 0.93 }, pH: [3.5, 5.2], ionicStrength_M: 1, medium: 'KCl', note: 'The range of pH is from memory too.', source: fromMemory('Sarka, Burai, Brücher, Chem. Eur. J. 6, 719 (2000)') }),
      acidAt25('<', 5, 's'), zincAt37(0.49, 263),
    ],
    constants: [],
  },
  {
    key: 'diethylenetriaminepentaacetate-bis-methylamide', code: 'DTPA-BMA',
    payload: {
      name: 'diethylenetriaminepentaacetate bis(methylamide)', smiles: 'CNC(=O)CN(CCN(CC(O)=O)CCN(CC(O)=O)CC(=O)NC)CC(O)=O', donors: donors({ 'amine N': 3, 'amide O': 2, 'carboxylate O': 3 }), denticity: 8, topology: 'openChain', charge: -3,
      protonation: protonation(BMA_STEPS, 'notStated', `${CACHERIS}. Looked up.`), note: null,
    },
    records: [
      thermoAt25('Gd', { logK: 16.85, protonation: BMA_STEPS, competitors: { Ca: 7.17, Zn: 12.04, Cu: 13.05 }, medium: 'notStated', source: fromMemory(CACHERIS, { note: 'The protonation constants were looked up.' }) }),
      thermoAt25('La', { logK: 14.55, protonation: BMA_STEPS, medium: 'notStated', source: lookedUp('NIST SRD 46') }),
      rateLawAt25({ constants: { k1_per_M_s: 12.7, kZn_per_M_s: 0.0078, kCu_per_M_s: 0.63 }, pH: [3.5, 5.2], ionicStrength_M: 1, medium: 'KCl', note: 'The range of pH is from memory too.', source: fromMemory('Sarka, Burai, Király, Zékány, Brücher, J. Inorg. Biochem. 91, 320 (2002)') }),
      acidAt25('<', 5, 's'), zincAt37(0.09, 58),
    ],
    constants: [],
  },
]

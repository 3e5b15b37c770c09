import type { LigandPayload } from '../../../shared/schemas/ligand'

/** What is asked of a ligand of the demonstration; protonation constants are invented, most basic first. */
interface DemoLigand { code: string, name: string, smiles: string, topology: LigandPayload['topology'], denticity: number, charge: number, donors: LigandPayload['donors'], protonation: readonly number[] | null }
export interface DemoBatch { lot: string, date: string, freeMetal: { kind: '=' | '<', value_frac: number } | null, note: string | null }
export interface DemoAgent {
  code: string, ligand: DemoLigand, metal: 'Gd' | 'Dy', q: number, charge: number, molarMass_g_per_mol: number, mechanism: 'T1' | 'T2', batches: readonly DemoBatch[]
  /** What this agent is in the story. */
  story: string
}

const N = (count: number) => ({ element: 'N' as const, kind: 'amine N' as const, count })
const O = (count: number, kind: 'carboxylate O' | 'amide O' | 'hydroxyl O' | 'phosphinate O' = 'carboxylate O') => ({ element: 'O' as const, kind, count })
const PYRIDINE = { element: 'N' as const, kind: 'pyridine N' as const, count: 1 }

/** Below the detection limit of the colorimetric test: a bound, not a zero. */
const clean = (lot: string, date: string, limit = 2e-5): DemoBatch => ({ lot, date, freeMetal: { kind: '<', value_frac: limit }, note: null })
const found = (lot: string, date: string, value_frac: number, note: string | null = null): DemoBatch => ({ lot, date, freeMetal: { kind: '=', value_frac }, note })

const ring = (code: string, name: string, smiles: string, rest: Partial<DemoLigand> = {}): DemoLigand =>
  ({ code, name, smiles, topology: 'ring', denticity: 8, charge: -4, donors: [N(4), O(4)], protonation: [11.9, 9.6, 4.5, 4.0], ...rest })
const chain = (code: string, name: string, smiles: string, rest: Partial<DemoLigand> = {}): DemoLigand =>
  ({ code, name, smiles, topology: 'openChain', denticity: 8, charge: -5, donors: [N(3), O(5)], protonation: [10.4, 8.5, 4.3, 2.7, 2.0], ...rest })

/** Agents of the programme Skerry. Structures are ordinary ligands of coordination chemistry; every number is invented for the demonstration. */
export const DEMO_AGENTS: readonly DemoAgent[] = [
  {
    code: 'SK-01', metal: 'Gd', q: 1, charge: -2, molarMass_g_per_mol: 547.6, mechanism: 'T1', story: 'open chain, a high log K, lets go quickly',
    ligand: chain('LK-01', 'diethylenetriamine pentaacetate', 'OC(=O)CN(CCN(CC(O)=O)CC(O)=O)CCN(CC(O)=O)CC(O)=O'), batches: [clean('A1', '2026-08-17'), clean('A2', '2026-08-31')],
  },
  {
    code: 'SK-02', metal: 'Gd', q: 1, charge: 0, molarMass_g_per_mol: 573.7, mechanism: 'T1', story: 'open-chain bisamide: as slow as its parent with zinc and copper about, and condemned by equilibrium',
    ligand: chain('LK-02', 'diethylenetriamine triacetate bis(methylamide)', 'CNC(=O)CN(CCN(CC(O)=O)CCN(CC(=O)NC)CC(O)=O)CC(O)=O', { charge: -3, donors: [N(3), O(3), O(2, 'amide O')], protonation: [9.4, 4.4, 3.3] }),
    batches: [clean('A1', '2026-08-18')],
  },
  {
    code: 'SK-03', metal: 'Gd', q: 1, charge: -1, molarMass_g_per_mol: 558.6, mechanism: 'T1', story: 'the inert yardstick: a tetraacetate ring',
    ligand: ring('LK-03', 'cyclen tetraacetate', 'OC(=O)CN1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1', { protonation: [12.0, 9.7, 4.5, 4.1] }), batches: [clean('A1', '2026-08-19'), clean('A2', '2026-09-02')],
  },
  {
    code: 'SK-04', metal: 'Gd', q: 1, charge: 0, molarMass_g_per_mol: 558.7, mechanism: 'T1', story: 'neutral ring with a hydroxypropyl arm',
    ligand: ring('LK-04', 'cyclen triacetate, 2-hydroxypropyl arm', 'CC(O)CN1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1', { charge: -3, donors: [N(4), O(3), O(1, 'hydroxyl O')], protonation: [11.9, 9.4, 4.3, 3.3] }),
    batches: [clean('A1', '2026-08-20'), clean('A2', '2026-09-03')],
  },
  {
    code: 'SK-05', metal: 'Gd', q: 1, charge: 3, molarMass_g_per_mol: 557.8, mechanism: 'T1', story: 'tetraamide ring: a low log K, and it barely lets go',
    ligand: ring('LK-05', 'cyclen tetrakis(methylacetamide)', 'CNC(=O)CN1CCN(CC(=O)NC)CCN(CC(=O)NC)CCN(CC(=O)NC)CC1', { charge: 0, donors: [N(4), O(4, 'amide O')], protonation: [9.6, 6.0] }), batches: [clean('A1', '2026-08-24')],
  },
  {
    code: 'SK-06', metal: 'Gd', q: 1, charge: -1, molarMass_g_per_mol: 648.7, mechanism: 'T1', story: 'a fine relaxivity and a failed free-metal test',
    ligand: ring('LK-06', 'cyclen tetraacetate, benzyl on one arm', 'OC(=O)C(Cc1ccccc1)N1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1', { protonation: [11.6, 9.4, 4.6, 3.9] }),
    batches: [found('A1', '2026-08-25', 4.1e-3, 'Purified once; the second pass failed.')],
  },
  {
    code: 'SK-07', metal: 'Gd', q: 2, charge: 0, molarMass_g_per_mol: 532.6, mechanism: 'T1', story: 'pyridine ring with two waters: potent, inert enough',
    ligand: ring('LK-07', 'pyridine-fused azamacrocycle triacetate', 'OC(=O)CN1CCN(CC(O)=O)Cc2cccc(CN(CC(O)=O)CC1)n2', { denticity: 7, charge: -3, donors: [N(3), PYRIDINE, O(3)], protonation: [11.3, 7.4, 3.9, 2.1] }),
    batches: [clean('A1', '2026-08-26'), clean('A2', '2026-09-09')],
  },
  {
    code: 'SK-08', metal: 'Gd', q: 1, charge: -1, molarMass_g_per_mol: 586.7, mechanism: 'T1', story: 'only literature stability so far',
    ligand: ring('LK-08', 'larger ring tetraacetate', 'OC(=O)CN1CCCN(CC(O)=O)CCN(CC(O)=O)CCCN(CC(O)=O)CC1', { protonation: [10.9, 10.1, 4.1, 3.2] }), batches: [{ lot: 'A1', date: '2026-09-21', freeMetal: null, note: 'Made last week; nothing measured yet.' }],
  },
  {
    code: 'SK-09', metal: 'Gd', q: 1, charge: -2, molarMass_g_per_mol: 630.7, mechanism: 'T1', story: 'phantom series with a bad tube, left out with a reason',
    ligand: ring('LK-09', 'cyclen tetraacetate, propionate on one arm', 'OC(=O)CCC(N1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1)C(O)=O', { charge: -5, donors: [N(4), O(4)], protonation: [11.7, 9.5, 5.1, 4.4, 3.6] }),
    batches: [clean('A1', '2026-08-27'), clean('A2', '2026-09-10')],
  },
  {
    code: 'SK-10', metal: 'Gd', q: 1, charge: -1, molarMass_g_per_mol: 594.7, mechanism: 'T1', story: 'the slopes of two batches differ',
    ligand: ring('LK-10', 'cyclen triacetate, methylphosphinate arm', 'OC(=O)CN1CCN(CC(O)=O)CCN(CP(C)(O)=O)CCN(CC(O)=O)CC1', { donors: [N(4), O(3), O(1, 'phosphinate O')], protonation: [11.8, 9.3, 4.2, 2.9] }),
    batches: [clean('A1', '2026-08-28'), clean('B1', '2026-09-14')],
  },
  {
    code: 'SK-11', metal: 'Gd', q: 1, charge: -1, molarMass_g_per_mol: 612.8, mechanism: 'T1', story: 'so inert that only a bound is known',
    ligand: ring('LK-11', 'cyclohexyl-fused cyclen tetraacetate', 'OC(=O)CN1CCN(CC(O)=O)CC2CCCCC2N(CC(O)=O)CCN(CC(O)=O)CC1', { protonation: [12.2, 9.8, 4.6, 4.0] }), batches: [clean('A1', '2026-09-01'), clean('A2', '2026-09-15')],
  },
  {
    code: 'SK-12', metal: 'Gd', q: 1, charge: -1, molarMass_g_per_mol: 600.7, mechanism: 'T1', story: 'waits for its check, with an outlier in one tube',
    ligand: ring('LK-12', 'cyclen tetraacetate, propyl on one arm', 'CCCC(N1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1)C(O)=O'), batches: [clean('A1', '2026-09-07')],
  },
  {
    code: 'SK-13', metal: 'Gd', q: 1, charge: 0, molarMass_g_per_mol: 571.7, mechanism: 'T1', story: 'returned to the chemist: the range is too short',
    ligand: ring('LK-13', 'cyclen triacetate, methylacetamide arm', 'CNC(=O)CN1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1', { charge: -3, donors: [N(4), O(3), O(1, 'amide O')], protonation: [11.0, 9.2, 4.4, 2.6] }),
    batches: [clean('A1', '2026-09-08')],
  },
  {
    code: 'SK-14', metal: 'Dy', q: 1, charge: -1, molarMass_g_per_mol: 563.9, mechanism: 'T2', story: 'a T2 agent: stands as faint context on the T1 map',
    ligand: ring('LK-14', 'cyclen tetraacetate, for dysprosium', 'OC(=O)CN1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1', { protonation: [12.0, 9.7, 4.5, 4.1] }), batches: [clean('A1', '2026-09-04')],
  },
  {
    code: 'SK-15', metal: 'Gd', q: 1, charge: -2, molarMass_g_per_mol: 589.6, mechanism: 'T1', story: 'measured in water at 1.5 T only: no working concentration under the profile',
    ligand: chain('LK-15', 'cyclohexyldiamine-based pentaacetate', 'OC(=O)CN(CCN(CC(O)=O)C1CCCCC1N(CC(O)=O)CC(O)=O)CC(O)=O', { protonation: [10.8, 8.6, 4.6, 2.9, 2.2] }), batches: [clean('A1', '2026-09-11')],
  },
  {
    code: 'SK-16', metal: 'Gd', q: 1, charge: -1, molarMass_g_per_mol: 634.7, mechanism: 'T1', story: 'an acid half-life and a zinc–phosphate ratio, no rate law',
    ligand: ring('LK-16', 'cyclen tetraacetate, phenyl on one arm', 'OC(=O)C(c1ccccc1)N1CCN(CC(O)=O)CCN(CC(O)=O)CCN(CC(O)=O)CC1', { protonation: [11.4, 9.3, 4.4, 3.7] }), batches: [clean('A1', '2026-09-16')],
  },
]

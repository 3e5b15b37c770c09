/**
 * The plasma model: which small molecules and sites compete for the metal and for the ligand, in which amounts.
 * A screening model with stated assumptions, not a description of anybody's blood.
 *
 * @source equilibrium models of metals in plasma: P. M. May, P. W. Linder, D. R. Williams, J. Chem. Soc., Dalton Trans. 588 (1977).
 * Constants below are rounded literature values for 37 °C and I = 0.15 M, from memory; good to about ±0.3, those of the
 * lanthanide with carbonate, phosphate and albumin to about ±0.7.
 */
import type { Species } from './system'

/** Totals of the plasma model. Zinc and copper are the exchangeable parts. */
export interface PlasmaTotals {
  readonly ca_mM: number
  readonly mg_mM: number
  readonly zn_uM: number
  readonly cu_uM: number
  readonly phosphate_mM: number
  readonly carbonate_mM: number
  readonly citrate_mM: number
  readonly lactate_mM: number
  readonly histidine_mM: number
  readonly albumin_mM: number
}

/** Starting values: screening assumptions, to be edited. */
export const PLASMA_TOTALS: PlasmaTotals = {
  ca_mM: 2.5, mg_mM: 0.8, zn_uM: 15, cu_uM: 1, phosphate_mM: 1.1, carbonate_mM: 25, citrate_mM: 0.11, lactate_mM: 1.5, histidine_mM: 0.08, albumin_mM: 0.63,
}

/** What the model takes for granted, in the words that screens and memos print. */
export const PLASMA_ASSUMPTIONS: readonly string[] = [
  'pH 7.4, 37 °C, ionic strength 0.15 M; constants measured elsewhere are used as they are.',
  'Zinc and copper are the exchangeable parts, bound to albumin, histidine and citrate.',
  'Iron is left out.',
  'Precipitates (lanthanide phosphate, carbonate) are left out: where they form, less stays bound than the model says.',
  'The weak calcium and magnesium sites of albumin are left out, so free calcium comes out somewhat high.',
  'Side reactions of the lanthanide with citrate, carbonate, phosphate, lactate and albumin are those of gadolinium, whichever lanthanide the complex holds.',
  'The complex is taken as ML only, with no mixed complexes and no excess ligand in the dose.',
]

/** Metal ions of the background that can take the ligand, in the order of the answer's "left out" list. */
export const PLASMA_COMPETITORS = ['Ca', 'Mg', 'Zn', 'Cu'] as const
export type PlasmaCompetitor = (typeof PLASMA_COMPETITORS)[number]

/** Anything that is not the agent: components Ca, Mg, Zn, Cu, PO4, CO3, Cit, Lac, His, Alb, H and the lanthanide Ln. */
const row = (name: string, logBeta: number, stoichiometry: Record<string, number>): Species => ({ name, logBeta, stoichiometry })

export const PLASMA_SPECIES: readonly Species[] = [
  row('HPO4', 11.6, { H: 1, PO4: 1 }), row('H2PO4', 18.2, { H: 2, PO4: 1 }), row('H3PO4', 20.2, { H: 3, PO4: 1 }),
  row('HCO3', 9.8, { H: 1, CO3: 1 }), row('H2CO3', 15.9, { H: 2, CO3: 1 }),
  row('HCit', 5.6, { H: 1, Cit: 1 }), row('H2Cit', 9.9, { H: 2, Cit: 1 }), row('H3Cit', 12.8, { H: 3, Cit: 1 }),
  row('HLac', 3.7, { H: 1, Lac: 1 }),
  row('HHis', 8.9, { H: 1, His: 1 }), row('H2His', 14.9, { H: 2, His: 1 }), row('H3His', 16.6, { H: 3, His: 1 }),
  row('OH', -13.36, { H: -1 }),
  row('CaCit', 3.5, { Ca: 1, Cit: 1 }), row('CaHPO4', 13.1, { Ca: 1, H: 1, PO4: 1 }), row('CaHCO3', 10.8, { Ca: 1, H: 1, CO3: 1 }), row('CaLac', 1.1, { Ca: 1, Lac: 1 }),
  row('MgCit', 3.4, { Mg: 1, Cit: 1 }), row('MgHPO4', 13.4, { Mg: 1, H: 1, PO4: 1 }), row('MgHCO3', 10.7, { Mg: 1, H: 1, CO3: 1 }), row('MgLac', 0.9, { Mg: 1, Lac: 1 }),
  row('ZnAlb', 7.1, { Zn: 1, Alb: 1 }), row('ZnHis', 6.5, { Zn: 1, His: 1 }), row('ZnHis2', 12, { Zn: 1, His: 2 }), row('ZnCit', 4.8, { Zn: 1, Cit: 1 }),
  row('ZnHPO4', 14, { Zn: 1, H: 1, PO4: 1 }), row('ZnOH', -8.8, { Zn: 1, H: -1 }),
  row('CuAlb', 12, { Cu: 1, Alb: 1 }), row('CuHis', 10.1, { Cu: 1, His: 1 }), row('CuHis2', 18, { Cu: 1, His: 2 }), row('CuCit', 5.9, { Cu: 1, Cit: 1 }), row('CuOH', -7.5, { Cu: 1, H: -1 }),
  row('LnCit', 7.8, { Ln: 1, Cit: 1 }), row('LnCit2', 11.6, { Ln: 1, Cit: 2 }), row('LnCO3', 6, { Ln: 1, CO3: 1 }), row('LnCO32', 10.3, { Ln: 1, CO3: 2 }),
  row('LnHPO4', 15.9, { Ln: 1, H: 1, PO4: 1 }), row('LnLac', 2.7, { Ln: 1, Lac: 1 }), row('LnLac2', 4.5, { Ln: 1, Lac: 2 }), row('LnAlb', 4, { Ln: 1, Alb: 1 }), row('LnOH', -7.9, { Ln: 1, H: -1 }),
]

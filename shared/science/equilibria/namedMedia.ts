/** Media that a calculation can be named after: data to be edited, with what each takes for granted in words. */
import { PLASMA_ASSUMPTIONS, PLASMA_TOTALS } from './media'
import { SELECTIVITY_COMPETITORS_M } from './selectivity'

export interface NamedMedium {
  readonly id: string
  readonly title: string
  readonly pcH: number
  readonly temperature_K: number
  readonly ionicStrength_M: number
  /** What each amount stands for: totals are shared out among their species, free concentrations are held. */
  readonly amountsAre: 'totals' | 'free'
  /** mol/L by component. */
  readonly amounts_M: Readonly<Record<string, number>>
  readonly assumptions: readonly string[]
  readonly source: string
}

const NO_SOLID = 'No solid forms in the model.'

export const NAMED_MEDIA: readonly NamedMedium[] = [
  {
    id: 'plasma', title: 'Plasma model', pcH: 7.4, temperature_K: 310.15, ionicStrength_M: 0.15, amountsAre: 'totals',
    amounts_M: {
      Ca: PLASMA_TOTALS.ca_mM / 1e3, Mg: PLASMA_TOTALS.mg_mM / 1e3, Zn: PLASMA_TOTALS.zn_uM / 1e6, Cu: PLASMA_TOTALS.cu_uM / 1e6, PO4: PLASMA_TOTALS.phosphate_mM / 1e3,
      CO3: PLASMA_TOTALS.carbonate_mM / 1e3, Cit: PLASMA_TOTALS.citrate_mM / 1e3, Lac: PLASMA_TOTALS.lactate_mM / 1e3, His: PLASMA_TOTALS.histidine_mM / 1e3, Alb: PLASMA_TOTALS.albumin_mM / 1e3,
    },
    assumptions: PLASMA_ASSUMPTIONS, source: 'screening assumptions, from practice, no single source',
  },
  {
    id: 'selectivity', title: 'Published selectivity set', pcH: 7.4, temperature_K: 298.15, ionicStrength_M: 0.1, amountsAre: 'free', amounts_M: SELECTIVITY_COMPETITORS_M,
    assumptions: [
      'Calcium, copper and zinc stand at the stated concentrations as free ions, however much ligand there is: a definition, not a description of plasma.',
      'Constants of 25 °C and 0.1 M are used as they are.', 'Nothing competes for the lanthanide.', NO_SOLID,
    ],
    source: 'Cacheris, Quay, Rocklage, Magn. Reson. Imaging 8, 467 (1990)',
  },
]

/** A medium with some amounts changed; the title then says that it was edited. Null where an amount is negative, not a number, or of nothing in the medium. */
export function editMedium(medium: NamedMedium, amounts_M: Readonly<Record<string, number>>): NamedMedium | null {
  const isFine = Object.entries(amounts_M).every(([name, value]) => name in medium.amounts_M && value >= 0 && value < Infinity)
  return isFine ? { ...medium, title: `${medium.title} (edited)`, amounts_M: { ...medium.amounts_M, ...amounts_M } } : null
}

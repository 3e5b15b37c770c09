/**
 * The screening profile: what contrast is asked for, where, against which limits. Flat, so that a form can render it from
 * PROFILE_FIELDS. Every starting value is a screening assumption from practice, to be edited, and is shown as such.
 */
import { PLASMA_TOTALS } from '../equilibria/media'
import type { Mechanism } from './types'

export interface ScreeningProfile {
  readonly name: string
  readonly mechanism: Mechanism
  /** Change of rate asked for: ΔR1 for T1 agents, ΔR2 for T2 agents. */
  readonly deltaRate1_per_s: number
  readonly deltaRate2_per_s: number
  /** Relaxation rates of the tissue; read by the detection model of CEST agents. */
  readonly tissueRate1_per_s: number
  readonly tissueRate2_per_s: number
  readonly b0_T: number
  readonly temperature_K: number
  readonly pH: number
  readonly medium: 'plasma' | 'blood' | 'aqueous'
  readonly eliminationSpecies: 'human' | 'mouse' | 'other'
  readonly eliminationHalfLife_s: number
  readonly slowShare_frac: number
  readonly slowShareLow_frac: number
  readonly slowShareHigh_frac: number
  readonly slowHalfLife_s: number
  readonly slowHalfLifeLow_s: number
  readonly slowHalfLifeHigh_s: number
  readonly distributionVolume_L_per_kg: number
  /** Exchangeable competitors of the rate law. */
  readonly exchangeableZn_uM: number
  readonly exchangeableCu_uM: number
  readonly exchangeableCa_mM: number
  /** Plasma model: concentration of the agent and totals. */
  readonly agentInPlasma_mM: number
  readonly plasmaCa_mM: number
  readonly plasmaMg_mM: number
  readonly plasmaZn_uM: number
  readonly plasmaCu_uM: number
  readonly plasmaPhosphate_mM: number
  readonly plasmaCarbonate_mM: number
  readonly plasmaCitrate_mM: number
  readonly plasmaLactate_mM: number
  readonly plasmaHistidine_mM: number
  readonly plasmaAlbumin_mM: number
  readonly limitWorkingConc_mM: number
  readonly limitLoss_frac: number
  readonly limitUnbound_uM: number
  readonly warnFreeMetal_frac: number
  readonly limitFreeMetal_frac: number
  readonly warnPM: number
  readonly warnZincPhosphateRatio: number
  readonly warnBoundAtEquilibrium_frac: number
  readonly limitRatioR2R1: number
  readonly batchesToAdvance: number
}

const HOUR_S = 3600
const DAY_S = 86400

/** "T1, 3 T": the profile that a new programme starts with. */
export const DEFAULT_PROFILE: ScreeningProfile = {
  name: 'T1, 3 T', mechanism: 'T1', deltaRate1_per_s: 1, deltaRate2_per_s: 10, tissueRate1_per_s: 0.7, tissueRate2_per_s: 15,
  b0_T: 3, temperature_K: 310.15, pH: 7.4, medium: 'plasma',
  eliminationSpecies: 'human', eliminationHalfLife_s: 1.6 * HOUR_S,
  slowShare_frac: 0.005, slowShareLow_frac: 0.001, slowShareHigh_frac: 0.01,
  slowHalfLife_s: 30 * DAY_S, slowHalfLifeLow_s: 6 * DAY_S, slowHalfLifeHigh_s: 365 * DAY_S,
  distributionVolume_L_per_kg: 0.25,
  exchangeableZn_uM: 10, exchangeableCu_uM: 1, exchangeableCa_mM: 1.2,
  agentInPlasma_mM: 0.4,
  plasmaCa_mM: PLASMA_TOTALS.ca_mM, plasmaMg_mM: PLASMA_TOTALS.mg_mM, plasmaZn_uM: PLASMA_TOTALS.zn_uM, plasmaCu_uM: PLASMA_TOTALS.cu_uM,
  plasmaPhosphate_mM: PLASMA_TOTALS.phosphate_mM, plasmaCarbonate_mM: PLASMA_TOTALS.carbonate_mM, plasmaCitrate_mM: PLASMA_TOTALS.citrate_mM,
  plasmaLactate_mM: PLASMA_TOTALS.lactate_mM, plasmaHistidine_mM: PLASMA_TOTALS.histidine_mM, plasmaAlbumin_mM: PLASMA_TOTALS.albumin_mM,
  limitWorkingConc_mM: 1, limitLoss_frac: 1e-3, limitUnbound_uM: 0.2,
  warnFreeMetal_frac: 2e-4, limitFreeMetal_frac: 1e-3, warnPM: 16, warnZincPhosphateRatio: 0.9, warnBoundAtEquilibrium_frac: 0.9,
  limitRatioR2R1: 2, batchesToAdvance: 2,
}

/** Half-lives of elimination by species, s; the species is always named beside the value. */
export const ELIMINATION_HALF_LIFE_S = { human: 1.6 * HOUR_S, mouse: 0.33 * HOUR_S } as const

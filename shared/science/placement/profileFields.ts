/** What a form needs to know of each number in the screening profile. Values are in stored units; `shown` says how the screen writes them. */
import type { ScreeningProfile } from './profile'

export type ProfileGroup = 'contrast' | 'residence' | 'competitors' | 'plasma' | 'limits'

export type ProfileNumberKey = { [K in keyof ScreeningProfile]: ScreeningProfile[K] extends number ? K : never }[keyof ScreeningProfile]

export interface ProfileField {
  readonly key: ProfileNumberKey
  readonly label: string
  /** Stored unit in the notation of units on screens (s^-1); '' for a plain number. */
  readonly unit: string
  /** Unit on the screen with its size in stored units, and the offset for °C. */
  readonly shown?: { readonly unit: string, readonly size: number, readonly offset?: number }
  readonly min: number
  readonly max: number
  /** Step in shown units. */
  readonly step: number
  readonly help: string
  readonly group: ProfileGroup
}

export const PROFILE_GROUPS: Readonly<Record<ProfileGroup, string>> = {
  contrast: 'Contrast', residence: 'Residence', competitors: 'Exchangeable competitors', plasma: 'Plasma model', limits: 'Limits',
}

const hours = { unit: 'h', size: 3600 }
const days = { unit: 'd', size: 86400 }
const percent = { unit: '%', size: 0.01 }

const field = (key: ProfileNumberKey, group: ProfileGroup, rest: Omit<ProfileField, 'key' | 'group'>): ProfileField => ({ key, group, ...rest })
const plasma = (key: ProfileNumberKey, label: string, unit: string, max: number, step: number): ProfileField =>
  field(key, 'plasma', { label, unit, min: 0, max, step, help: 'Total in the plasma model. Screening assumption.' })

export const PROFILE_FIELDS: readonly ProfileField[] = [
  field('deltaRate1_per_s', 'contrast', { label: 'ΔR1 asked for', unit: 's^-1', min: 0.05, max: 50, step: 0.1, help: 'Change of R1 that counts as contrast. Screening assumption.' }),
  field('deltaRate2_per_s', 'contrast', { label: 'ΔR2 asked for', unit: 's^-1', min: 0.5, max: 500, step: 1, help: 'Change of R2 that counts as contrast, for T2 agents. Screening assumption.' }),
  field('tissueRate1_per_s', 'contrast', { label: 'R1 of the tissue', unit: 's^-1', min: 0.05, max: 10, step: 0.05, help: 'Used for detection by saturation transfer. Screening assumption.' }),
  field('tissueRate2_per_s', 'contrast', { label: 'R2 of the tissue', unit: 's^-1', min: 0.5, max: 500, step: 1, help: 'Used for detection by saturation transfer. Screening assumption.' }),
  field('b0_T', 'contrast', { label: 'Field', unit: 'T', min: 0.01, max: 25, step: 0.1, help: 'A measurement counts within 5 % of this field.' }),
  field('temperature_K', 'contrast', { label: 'Temperature', unit: 'K', shown: { unit: '°C', size: 1, offset: 273.15 }, min: 273.15, max: 333.15, step: 0.5, help: 'A measurement counts within 2 K; rate constants are carried here by their activation enthalpy.' }),
  field('pH', 'contrast', { label: 'pH', unit: '', min: 3, max: 10, step: 0.1, help: 'A measurement counts within 0.2; rate laws and the plasma model are evaluated here.' }),
  field('eliminationHalfLife_s', 'residence', { label: 'Half-life of elimination', unit: 's', shown: hours, min: 60, max: 3.2e7, step: 0.01, help: 'About 1.6 h in man, 0.33 h in mouse. Screening assumption; name the species.' }),
  field('slowShare_frac', 'residence', { label: 'Slow share of the dose', unit: '', shown: percent, min: 0, max: 0.5, step: 0.1, help: 'Share that enters a compartment it leaves slowly. 0 switches it off. Screening assumption.' }),
  field('slowShareLow_frac', 'residence', { label: 'Slow share, low end', unit: '', shown: percent, min: 0, max: 0.5, step: 0.1, help: 'Lower end of the 95 % range that draws take.' }),
  field('slowShareHigh_frac', 'residence', { label: 'Slow share, high end', unit: '', shown: percent, min: 0, max: 0.5, step: 0.1, help: 'Upper end of the 95 % range that draws take.' }),
  field('slowHalfLife_s', 'residence', { label: 'Slow half-life', unit: 's', shown: days, min: 3600, max: 3.2e9, step: 1, help: 'A small share that stays for weeks dominates the loss of an inert agent. Screening assumption.' }),
  field('slowHalfLifeLow_s', 'residence', { label: 'Slow half-life, low end', unit: 's', shown: days, min: 3600, max: 3.2e9, step: 1, help: 'Lower end of the 95 % range that draws take.' }),
  field('slowHalfLifeHigh_s', 'residence', { label: 'Slow half-life, high end', unit: 's', shown: days, min: 3600, max: 3.2e9, step: 1, help: 'Upper end of the 95 % range that draws take.' }),
  field('distributionVolume_L_per_kg', 'residence', { label: 'Distribution volume', unit: 'L/kg', min: 0.02, max: 5, step: 0.01, help: 'Turns a concentration into an amount per body mass. Screening assumption.' }),
  field('exchangeableZn_uM', 'competitors', { label: 'Zinc', unit: 'µM', min: 0, max: 1000, step: 1, help: 'Exchangeable, not free: free zinc in plasma is about a nanomole per litre.' }),
  field('exchangeableCu_uM', 'competitors', { label: 'Copper', unit: 'µM', min: 0, max: 1000, step: 0.1, help: 'Exchangeable, not free.' }),
  field('exchangeableCa_mM', 'competitors', { label: 'Calcium', unit: 'mM', min: 0, max: 20, step: 0.1, help: 'Exchangeable.' }),
  field('agentInPlasma_mM', 'plasma', { label: 'Agent', unit: 'mM', min: 0.001, max: 100, step: 0.1, help: 'Concentration at which the equilibrium is worked out; 0.1 mmol/kg in 0.25 L/kg gives 0.4. Screening assumption.' }),
  plasma('plasmaCa_mM', 'Calcium', 'mM', 20, 0.1),
  plasma('plasmaMg_mM', 'Magnesium', 'mM', 20, 0.1),
  plasma('plasmaZn_uM', 'Zinc, exchangeable', 'µM', 1000, 1),
  plasma('plasmaCu_uM', 'Copper, exchangeable', 'µM', 1000, 0.1),
  plasma('plasmaPhosphate_mM', 'Phosphate', 'mM', 100, 0.1),
  plasma('plasmaCarbonate_mM', 'Carbonate', 'mM', 200, 1),
  plasma('plasmaCitrate_mM', 'Citrate', 'mM', 50, 0.01),
  plasma('plasmaLactate_mM', 'Lactate', 'mM', 100, 0.1),
  plasma('plasmaHistidine_mM', 'Histidine', 'mM', 50, 0.01),
  plasma('plasmaAlbumin_mM', 'Albumin sites', 'mM', 10, 0.01),
  field('limitWorkingConc_mM', 'limits', { label: 'Working concentration, at most', unit: 'mM', min: 0.001, max: 100, step: 0.1, help: 'Above it the agent is over the limit. Screening assumption.' }),
  field('limitLoss_frac', 'limits', { label: 'Loss, at most', unit: '', min: 1e-9, max: 1, step: 0.0001, help: 'Judged at the upper 95 % end of the loss. Screening assumption.' }),
  field('limitUnbound_uM', 'limits', { label: 'Unbound metal, at most', unit: 'µM', min: 1e-6, max: 1000, step: 0.05, help: 'At the working concentration, free metal of the batch included. Screening assumption.' }),
  field('warnFreeMetal_frac', 'limits', { label: 'Free metal in the batch, warning', unit: '', shown: percent, min: 0, max: 1, step: 0.01, help: 'Above it the batch is marked. Screening assumption.' }),
  field('limitFreeMetal_frac', 'limits', { label: 'Free metal in the batch, at most', unit: '', shown: percent, min: 0, max: 1, step: 0.01, help: 'Above it the agent is over the limit. Screening assumption.' }),
  field('warnPM', 'limits', { label: 'pM, at least', unit: '', min: 0, max: 30, step: 0.5, help: 'At pH 7.4 with 1 µM metal and 10 µM ligand. A warning. Screening assumption.' }),
  field('warnZincPhosphateRatio', 'limits', { label: 'Zinc–phosphate ratio at 72 h, at least', unit: '', min: 0, max: 1, step: 0.01, help: 'A warning. Screening assumption.' }),
  field('warnBoundAtEquilibrium_frac', 'limits', { label: 'Bound at equilibrium, at least', unit: '', shown: percent, min: 0, max: 1, step: 1, help: 'In the plasma model. A warning. Screening assumption.' }),
  field('limitRatioR2R1', 'limits', { label: 'r2/r1, at most', unit: '', min: 0.5, max: 100, step: 0.1, help: 'For T1 agents. Screening assumption.' }),
  field('batchesToAdvance', 'limits', { label: 'Batches to advance', unit: '', min: 1, max: 20, step: 1, help: 'Independent batches asked for before an agent goes forward.' }),
]

export interface ProfileProblem {
  readonly key: string
  readonly message: string
  readonly accepted: string
}

/** Everything wrong with a profile, field by field; empty when it can be used. */
export function profileProblems(profile: ScreeningProfile): ProfileProblem[] {
  const problems: ProfileProblem[] = []
  for (const { key, label, min, max, unit } of PROFILE_FIELDS) {
    const value = profile[key]
    if (!Number.isFinite(value) || value < min || value > max) {
      problems.push({ key, message: `${label} is ${Number.isFinite(value) ? 'outside its range' : 'not a number'}`, accepted: `${min} to ${max}${unit && ` ${unit}`}` })
    }
  }
  const ordered = (low: ProfileNumberKey, middle: ProfileNumberKey, high: ProfileNumberKey, label: string): void => {
    if (!(profile[low] <= profile[middle] && profile[middle] <= profile[high])) problems.push({ key: low, message: `the range of the ${label} does not hold its value`, accepted: 'low end, value and high end in rising order' })
  }
  if (profile.slowShare_frac > 0) ordered('slowShareLow_frac', 'slowShare_frac', 'slowShareHigh_frac', 'slow share')
  ordered('slowHalfLifeLow_s', 'slowHalfLife_s', 'slowHalfLifeHigh_s', 'slow half-life')
  if (profile.warnFreeMetal_frac > profile.limitFreeMetal_frac) problems.push({ key: 'warnFreeMetal_frac', message: 'the warning lies above the limit', accepted: 'at most the limit' })
  return problems
}

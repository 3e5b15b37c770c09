/** A concentration with its standard error. */
export interface Concentration {
  readonly conc_mM: number
  readonly se_mM: number | null
}

/** Demagnetisation factor s of the sample shape in the shift formula: coaxial tube along B0, across it, sphere. */
export const SHAPE_FACTORS = { parallel: 1 / 3, perpendicular: -1 / 6, sphere: 0 } as const

export type SampleShape = keyof typeof SHAPE_FACTORS

export interface SusceptibilityConditions {
  readonly temperature_K: number
  /** Effective magnetic moment of the ion, Bohr magnetons (Gd³⁺: 7.94). */
  readonly muEff: number
  readonly shape: SampleShape
}

/** Moment of the Evans formula: √(3k/(N·β²)) in the units of the equation, as published. */
const EVANS_MOMENT = 2.84

/** Shift per concentration, ppm per mM: 4π·s/T·(μ_eff/2.84)², the 10³ of ppm and of mol/L cancelling. NaN outside T > 0. */
function shiftPerConcentration({ temperature_K, muEff, shape }: SusceptibilityConditions): number {
  if (!(temperature_K > 0)) return NaN
  return ((4 * Math.PI * SHAPE_FACTORS[shape]) / temperature_K) * (muEff / EVANS_MOMENT) ** 2
}

/**
 * Bulk magnetic susceptibility shift between the solution and a reference inside the same tube:
 *     Δδ (ppm) = 10³·(4π·c·s/T)·(μ_eff/2.84)², c in mol/L
 * @param conc_mM concentration of the paramagnetic ion
 * @source Corsi et al., Magn. Reson. Chem. 39, 723 (2001), from memory
 */
export function susceptibilityShift_ppm(conc_mM: number, conditions: SusceptibilityConditions): number {
  return conc_mM * shiftPerConcentration(conditions)
}

/** Concentration from a measured shift; a sphere shows none, and then there is no answer. */
export function concentrationFromShift(shift_ppm: number, shiftSe_ppm: number | null, conditions: SusceptibilityConditions): Concentration | null {
  const perConcentration = shiftPerConcentration(conditions)
  if (!Number.isFinite(perConcentration) || perConcentration === 0) return null
  return { conc_mM: shift_ppm / perConcentration, se_mM: shiftSe_ppm === null ? null : Math.abs(shiftSe_ppm / perConcentration) }
}

export interface IcpReading {
  readonly mass_mg_per_L: number
  readonly massSe_mg_per_L: number | null
  /** Volume of the diluted sample over the volume taken, ≥ 1. */
  readonly dilution: number
  /** Relative standard error of the dilution; null = not given. */
  readonly dilutionSe_frac: number | null
  /** Molar mass of the metal. */
  readonly metal_g_per_mol: number
}

/** Concentration of metal from an elemental analysis of a diluted sample: mg/L over g/mol is mmol/L. Null for numbers that are no reading. */
export function concentrationFromIcp({ mass_mg_per_L, massSe_mg_per_L, dilution, dilutionSe_frac, metal_g_per_mol }: IcpReading): Concentration | null {
  if (!(mass_mg_per_L >= 0) || !(dilution >= 1) || !(metal_g_per_mol > 0)) return null
  const conc_mM = (mass_mg_per_L * dilution) / metal_g_per_mol
  if (massSe_mg_per_L === null) return { conc_mM, se_mM: null }
  return { conc_mM, se_mM: Math.hypot((massSe_mg_per_L * dilution) / metal_g_per_mol, conc_mM * (dilutionSe_frac ?? 0)) }
}

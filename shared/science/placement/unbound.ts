/** Unbound metal at the working concentration: what the batch brings along and what lets go. */

/** f_free + (1 − f_free)·loss. */
export function unboundFraction(freeMetal_frac: number, loss_frac: number): number {
  return freeMetal_frac + (1 - freeMetal_frac) * loss_frac
}

/** Concentration of unbound metal, µM, at a working concentration in mM. */
export function unboundMetal_uM(workingConc_mM: number, unbound_frac: number): number {
  return workingConc_mM * 1000 * unbound_frac
}

/** The same as an amount per body mass: C_w·V_d·fraction. */
export function unboundMetal_umol_per_kg(workingConc_mM: number, unbound_frac: number, distributionVolume_L_per_kg: number): number {
  return unboundMetal_uM(workingConc_mM, unbound_frac) * distributionVolume_L_per_kg
}

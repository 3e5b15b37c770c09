/**
 * Ionic strength and the pH scale.
 *
 * @source C. W. Davies, Ion Association (Butterworths, 1962); A = 0.509 at 25 °C, 0.52 at 37 °C (water).
 */
import { GAS_J_per_mol_K } from '../constants'

/** Above this ionic strength the Davies equation is outside its range. */
export const DAVIES_LIMIT_M = 0.5

/** How the pH of a record was read. */
export type PhScale = 'activity' | 'concentration'

/** Debye–Hückel slope of water, linear between 0.509 (25 °C) and 0.5235 (37 °C); accurate to 0.002 from 15 to 45 °C. */
function debyeSlope(temperature_K: number): number {
  return 0.509 + (0.0145 / 12) * (temperature_K - 298.15)
}

/** log10 of the activity coefficient of an ion of charge z. NaN for a negative ionic strength. */
export function logActivityCoefficient(charge: number, ionicStrength_M: number, temperature_K = 298.15): number {
  if (!(ionicStrength_M >= 0)) return NaN
  const root = Math.sqrt(ionicStrength_M)
  return -debyeSlope(temperature_K) * charge * charge * (root / (1 + root) - 0.3 * ionicStrength_M)
}

export interface MovedConstant {
  readonly logBeta: number
  /** False where either ionic strength lies above the range of the Davies equation: the value is then only an indication. */
  readonly withinRange: boolean
}

/**
 * Carries log β from one ionic strength to another. `deltaZ2` is Σ z² of the products minus Σ z² of the reactants
 * (for Gd³⁺ + L⁵⁻ → GdL²⁻: 4 − 9 − 25 = −30).
 */
export function moveToIonicStrength(logBeta: number, deltaZ2: number, from_M: number, to_M: number, temperature_K = 298.15): MovedConstant {
  const perUnit = logActivityCoefficient(1, from_M, temperature_K) - logActivityCoefficient(1, to_M, temperature_K)
  return {
    logBeta: logBeta + deltaZ2 * perUnit,
    withinRange: from_M <= DAVIES_LIMIT_M && to_M <= DAVIES_LIMIT_M,
  }
}

/**
 * −log10 [H⁺] from a pH. An electrode calibrated with activity buffers reads −log a(H⁺); at I = 0.15 M
 * the two differ by about 0.12.
 */
export function minusLogHydrogen(pH: number, scale: PhScale, ionicStrength_M: number, temperature_K = 298.15): number {
  return scale === 'concentration' ? pH : pH + logActivityCoefficient(1, ionicStrength_M, temperature_K)
}

/** log β at another temperature by van 't Hoff with a constant reaction enthalpy; null enthalpy means: not moved. */
export function moveToTemperature(
  logBeta: number, enthalpy_kJ_per_mol: number | null, from_K: number, to_K: number,
): { readonly logBeta: number, readonly moved: boolean } {
  if (enthalpy_kJ_per_mol === null) return { logBeta, moved: false }
  const shift = (-enthalpy_kJ_per_mol * 1000 / (GAS_J_per_mol_K * Math.LN10)) * (1 / to_K - 1 / from_K)
  return { logBeta: logBeta + shift, moved: true }
}

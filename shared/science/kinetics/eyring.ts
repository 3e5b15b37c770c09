/**
 * Temperature dependence of a rate constant by transition-state theory.
 *
 * k = (k_B T / h) · exp(ΔS‡/R − ΔH‡/(R T))
 *
 * @source H. Eyring, J. Chem. Phys. 3, 107 (1935).
 */
import { BOLTZMANN_J_per_K, GAS_J_per_mol_K, PLANCK_J_s } from '../constants'
import { exactExp } from '../exactMath'

/** Rate constant from activation enthalpy and entropy, s⁻¹. NaN unless the temperature is above 0 K. */
export function eyringRate_per_s(temperature_K: number, enthalpy_kJ_per_mol: number, entropy_J_per_mol_K: number): number {
  if (!(temperature_K > 0)) return NaN
  const exponent = entropy_J_per_mol_K / GAS_J_per_mol_K - (enthalpy_kJ_per_mol * 1000) / (GAS_J_per_mol_K * temperature_K)
  return (BOLTZMANN_J_per_K * temperature_K / PLANCK_J_s) * Math.exp(exponent)
}

/** k(to)/k(from) for a constant activation enthalpy. Independent of the order of the reaction. */
export function eyringRatio(enthalpy_kJ_per_mol: number, from_K: number, to_K: number): number {
  if (!(from_K > 0) || !(to_K > 0)) return NaN
  return (to_K / from_K) * exactExp((-enthalpy_kJ_per_mol * 1000 / GAS_J_per_mol_K) * (1 / to_K - 1 / from_K))
}

/** k(to)/k(from) for a constant Arrhenius activation energy. */
export function arrheniusRatio(energy_kJ_per_mol: number, from_K: number, to_K: number): number {
  if (!(from_K > 0) || !(to_K > 0)) return NaN
  return Math.exp((-energy_kJ_per_mol * 1000 / GAS_J_per_mol_K) * (1 / to_K - 1 / from_K))
}

/** Temperatures closer than this count as the same: nothing is carried and nothing is said. */
export const SAME_TEMPERATURE_K = 1

export interface CarriedFactor {
  /** Multiply the constant by this. */
  readonly factor: number
  /** Relative standard error that the enthalpy's own error adds. */
  readonly relativeSe: number
  readonly status: 'sameTemperature' | 'carried' | 'notCarried' | 'temperatureUnknown'
}

export interface TemperatureOfConstant {
  readonly temperature_K: number | null
  /** Activation enthalpy; null where it was not measured: the constant is then not moved, and says so. */
  readonly enthalpy_kJ_per_mol: number | null
  readonly enthalpy_se_kJ_per_mol: number | null
}

/** The factor that carries a constant to another temperature, or 1 with the reason why it was not carried. */
export function carryFactor(measured: TemperatureOfConstant, to_K: number): CarriedFactor {
  const from_K = measured.temperature_K
  if (from_K === null) return { factor: 1, relativeSe: 0, status: 'temperatureUnknown' }
  if (Math.abs(from_K - to_K) < SAME_TEMPERATURE_K) return { factor: 1, relativeSe: 0, status: 'sameTemperature' }
  if (measured.enthalpy_kJ_per_mol === null) return { factor: 1, relativeSe: 0, status: 'notCarried' }
  const perKilojoule = (1000 / GAS_J_per_mol_K) * Math.abs(1 / to_K - 1 / from_K)
  return {
    factor: eyringRatio(measured.enthalpy_kJ_per_mol, from_K, to_K),
    relativeSe: perKilojoule * (measured.enthalpy_se_kJ_per_mol ?? 0),
    status: 'carried',
  }
}

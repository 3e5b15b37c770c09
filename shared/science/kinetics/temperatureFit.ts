/**
 * Activation parameters from rates at several temperatures, about the mean of 1/T so that the two parameters are nearly uncorrelated.
 * Eyring: ln(k·h/(k_B·T)) = ΔS/R − ΔH/(R·T). Arrhenius: ln k = ln A − E_a/(R·T).
 * @source H. Eyring, J. Chem. Phys. 3, 107 (1935); S. Arrhenius, Z. Phys. Chem. 4, 226 (1889), from memory
 */
import { BOLTZMANN_J_per_K, GAS_J_per_mol_K, PLANCK_J_s } from '../constants'
import { tQuantile } from '../statistics'
import type { RateValue } from './firstOrder'
import { refuseKinetics, solveWeighted, type KineticsRefusal } from './weightedLinear'

export interface TemperaturePoint { readonly temperature_K: number, readonly rate_per_s: number, readonly se_per_s: number | null }
export interface Activation {
  readonly ok: true
  readonly theory: 'eyring' | 'arrhenius'
  /** ΔH (Eyring) or E_a (Arrhenius). */
  readonly energy_kJ_per_mol: number
  readonly energySe_kJ_per_mol: number
  /** ΔS in J/(mol K) (Eyring) or ln(A·s) (Arrhenius). */
  readonly second: number
  readonly secondSe: number
  readonly correlation: number
  readonly dof: number
  /** Rate at a temperature with its 95 % interval from the whole covariance, and how far outside the measured range it lies. */
  readonly at: (temperature_K: number) => { readonly rate_per_s: RateValue, readonly outside_K: number }
}

/** Fits rates at three temperatures or more; temperatures that look like °C are refused with the question. */
export function fitActivation(points: readonly TemperaturePoint[], theory: Activation['theory']): Activation | KineticsRefusal {
  const bad = points.findIndex(p => !(p.rate_per_s > 0 && Number.isFinite(p.rate_per_s) && (p.se_per_s === null || p.se_per_s > 0)))
  if (bad >= 0) return refuseKinetics('badPoint', `Rate ${bad + 1} or its error is not above zero.`, 'Rates and errors above zero.')
  const celsius = points.findIndex(p => !(p.temperature_K > 200 && p.temperature_K < 1000))
  if (celsius >= 0) return refuseKinetics('celsiusAsKelvin', `Rate ${celsius + 1}: ${points[celsius]!.temperature_K} K: is it in °C?`, 'Temperatures in K (25 °C is 298.15 K), between 200 and 1000 K.')
  if (new Set(points.map(p => p.temperature_K)).size < 3) return refuseKinetics('tooFewPoints', 'Fewer than three temperatures.', 'At least three different temperatures.')
  const known = points.every(p => p.se_per_s !== null)
  if (!known && points.some(p => p.se_per_s !== null)) return refuseKinetics('mixedErrors', 'Some rates have an error and some have none.', 'An error for every rate, or for none.')
  const base = (T: number): number => (theory === 'eyring' ? Math.log(BOLTZMANN_J_per_K * T / PLANCK_J_s) : 0)
  const inverse = points.map(p => 1000 / (GAS_J_per_mol_K * p.temperature_K))
  const centre = inverse.reduce((sum, v) => sum + v, 0) / inverse.length
  const y = points.map(p => Math.log(p.rate_per_s) - base(p.temperature_K))
  const line = solveWeighted([y.map(() => 1), inverse.map(v => centre - v)], y, points.map(p => (p.se_per_s === null ? 1 : p.se_per_s / p.rate_per_s)))
  if (!line) return refuseKinetics('tooFewPoints', 'The temperatures lie too close together.', 'Temperatures spread over 10 K or more.')
  const dof = points.length - 2
  const variance = known ? Math.max(1, line.chi2 / dof) : line.chi2 / dof
  const [[vMiddle, cov], [, vEnergy]] = line.covariance.map(row => row.map(v => v * variance)) as [[number, number], [number, number]]
  const [middle, energy] = line.values as [number, number]
  const scale = theory === 'eyring' ? GAS_J_per_mol_K : 1
  const interceptVariance = vMiddle + centre * centre * vEnergy + 2 * centre * cov
  const temperatures = points.map(p => p.temperature_K)
  return {
    ok: true, theory, dof, energy_kJ_per_mol: energy, energySe_kJ_per_mol: Math.sqrt(vEnergy),
    second: scale * (middle + centre * energy), secondSe: scale * Math.sqrt(interceptVariance),
    correlation: variance > 0 ? (cov + centre * vEnergy) / Math.sqrt(vEnergy * interceptVariance) : 0,
    at: temperature_K => {
      const arm = centre - 1000 / (GAS_J_per_mol_K * temperature_K)
      const value = Math.exp(base(temperature_K) + middle + arm * energy)
      const spread = Math.sqrt(Math.max(0, vMiddle + arm * arm * vEnergy + 2 * arm * cov))
      const half = tQuantile(0.975, dof) * spread
      return {
        rate_per_s: { value, kind: '=', se: value * spread, interval: [value * Math.exp(-half), value * Math.exp(half)] },
        outside_K: Math.max(0, Math.min(...temperatures) - temperature_K, temperature_K - Math.max(...temperatures)),
      }
    },
  }
}

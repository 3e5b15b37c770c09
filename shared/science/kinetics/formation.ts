/**
 * Formation of the complex: k_obs = k_w + k_OH·[OH⁻], from rates at several pH, and the time to a yield when labelling.
 * [OH⁻] = 10^(pH − pK_w); pK_w at the temperature and ionic strength is the caller's and is printed.
 * @source É. Tóth, E. Brücher, I. Lázár, I. Tóth, Inorg. Chem. 33, 4070 (1994), from memory
 */
import { tQuantile } from '../statistics'
import type { RateValue } from './firstOrder'
import { refuseKinetics, solveNonNegative, solveWeighted, upperBound95, type KineticsRefusal } from './weightedLinear'

export interface FormationPoint { readonly pH: number, readonly rate_per_s: number, readonly se_per_s: number | null }
export interface FormationFit {
  readonly ok: true
  readonly kOH_per_M_s: RateValue
  /** Path without hydroxide; '<': a bound that the data cannot exclude. */
  readonly kWater_per_s: RateValue
  readonly pHMin: number
  readonly pHMax: number
  readonly dof: number
}

/** [OH⁻] in mol/L. */
export const hydroxide_M = (pH: number, pKw: number): number => 10 ** (pH - pKw)

/** Fits both terms, neither below zero. */
export function fitFormation(points: readonly FormationPoint[], pKw: number): FormationFit | KineticsRefusal {
  const bad = points.findIndex(p => !(p.rate_per_s > 0 && p.pH >= 0 && p.pH <= 14 && (p.se_per_s === null || p.se_per_s > 0)))
  if (bad >= 0) return refuseKinetics('badPoint', `Rate ${bad + 1}: the rate or its error is not above zero, or the pH is outside 0 to 14.`, 'Rates and errors above zero, pH from 0 to 14.')
  if (!(pKw > 11 && pKw < 16)) return refuseKinetics('badPKw', `pK_w of ${pKw}.`, 'pK_w between 11 and 16 (13.8 at 25 °C and 0.1 M).')
  if (new Set(points.map(p => p.pH)).size < 3) return refuseKinetics('tooFewPoints', 'Fewer than three pH.', 'Rates at three pH or more.')
  const known = points.every(p => p.se_per_s !== null)
  if (!known && points.some(p => p.se_per_s !== null)) return refuseKinetics('mixedErrors', 'Some rates have an error and some have none.', 'An error for every rate, or for none.')
  const columns = [points.map(p => hydroxide_M(p.pH, pKw)), points.map(() => 1)]
  const [y, sigma] = [points.map(p => p.rate_per_s), points.map(p => p.se_per_s ?? p.rate_per_s)]
  const best = solveNonNegative(columns, y, sigma)
  const dof = points.length - 2
  const variance = known ? Math.max(1, best.chi2 / dof) : best.chi2 / dof
  const active = solveWeighted(best.active.map(j => columns[j]!), y, sigma)
  const term = (j: number): RateValue => {
    const at = best.active.indexOf(j)
    const se = at < 0 || !active ? null : Math.sqrt(variance * active.covariance[at]![at]!)
    const value = best.values[j]!
    if (se === null || value <= tQuantile(0.95, dof) * se) return { value: upperBound95({ columns, y, sigma, variance, dof }, best, j), kind: '<', se: null, interval: null }
    const half = tQuantile(0.975, dof) * se / value
    return { value, kind: '=', se, interval: [value * Math.exp(-half), value * Math.exp(half)] }
  }
  const pHs = points.map(p => p.pH)
  return { ok: true, kOH_per_M_s: term(0), kWater_per_s: term(1), pHMin: Math.min(...pHs), pHMax: Math.max(...pHs), dof }
}

/**
 * Time until a share of the metal is bound, s, for a rate measured at `reference_M` of ligand in excess and first order in ligand (second order with the ligand used up
 * exactly: A + B with A the metal). A ligand short of the metal never reaches a share above ligand/metal: Infinity. NaN outside the domain.
 */
export function timeToYield_s(k: { readonly rate_per_s: number, readonly reference_M: number }, metal_M: number, ligand_M: number, yield_frac: number): number {
  if (!(k.rate_per_s > 0 && k.reference_M > 0 && metal_M > 0 && ligand_M > 0 && yield_frac > 0 && yield_frac < 1)) return NaN
  const second_per_M_s = k.rate_per_s / k.reference_M
  if (yield_frac * metal_M >= ligand_M) return Infinity
  const excess_M = ligand_M - metal_M
  if (Math.abs(excess_M) < 1e-6 * ligand_M) return yield_frac / (1 - yield_frac) / (second_per_M_s * ligand_M)
  return Math.log((1 - yield_frac * metal_M / ligand_M) / (1 - yield_frac)) / (second_per_M_s * excess_M)
}

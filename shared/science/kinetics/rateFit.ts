/**
 * Rates against acid and metal fitted to the sum form of the rate law, constants not below zero. A term that the data cannot exclude keeps its one-sided
 * 95 % bound: leaving it out would turn noise of a few per cent into half-lives of thousands of years at neutral pH.
 */
import type { RateConstant, RateLaw } from './rateLaw'
import { RATE_TERMS, type RateConditions, type SumConstant } from './rateTerms'
import { profileChi2, refuseKinetics, solveNonNegative, solveWeighted, upperBound95, type KineticsRefusal, type NonNegativeProblem } from './weightedLinear'
import { tQuantile } from '../statistics'

export interface RatePoint {
  readonly conditions: RateConditions
  readonly rate_per_s: number
  /** Standard error; null for all points: the same relative error is assumed and its size taken from the scatter. */
  readonly se_per_s: number | null
}
export interface FittedTerm { readonly name: SumConstant, readonly value: number, readonly kind: '=' | '<', readonly se: number | null, readonly upper95: number }
export interface RateFit {
  readonly ok: true
  readonly terms: readonly FittedTerm[]
  readonly chi2: number
  readonly dof: number
  readonly pHMin: number
  readonly pHMax: number
  readonly temperature_K: number
  readonly correlation: (a: SumConstant, b: SumConstant) => number
}

const NEAR_K = 1

function refusalOf(points: readonly RatePoint[], names: readonly SumConstant[]): KineticsRefusal | null {
  const bad = points.findIndex(p => !(p.rate_per_s > 0 && Number.isFinite(p.rate_per_s) && Number.isFinite(p.conditions.pH) && (p.se_per_s === null || p.se_per_s > 0)))
  if (bad >= 0) return refuseKinetics('badPoint', `Rate ${bad + 1} or its error is not above zero, or its pH is missing.`, 'Rates and errors above zero.')
  const celsius = points.findIndex(p => !(p.conditions.temperature_K > 200))
  if (celsius >= 0) return refuseKinetics('celsiusAsKelvin', `Rate ${celsius + 1}: ${points[celsius]!.conditions.temperature_K} K is far below freezing: is it in °C?`, 'Temperatures in K (25 °C is 298.15 K).')
  if (names.length === 0) return refuseKinetics('noTerms', 'No term is named.', 'One term or more of the rate law.')
  const distinct = new Set(points.map(p => JSON.stringify([p.conditions.pH, Object.entries(p.conditions.competitors_M).sort()]))).size
  if (distinct < Math.max(3, names.length + 1)) return refuseKinetics('tooFewPoints', `${distinct} different conditions for ${names.length} terms.`, `At least ${Math.max(3, names.length + 1)} different conditions.`)
  const temperatures = points.map(p => p.conditions.temperature_K)
  if (Math.max(...temperatures) - Math.min(...temperatures) > NEAR_K) return refuseKinetics('severalTemperatures', 'The rates were measured at several temperatures.', `One law for each temperature (within ${NEAR_K} K); then the temperature fit.`)
  const mixed = points.some(p => p.se_per_s === null) && points.some(p => p.se_per_s !== null)
  return mixed ? refuseKinetics('mixedErrors', 'Some rates have an error and some have none.', 'An error for every rate, or for none.') : null
}

/** Fits the named terms to rates measured at one temperature. */
export function fitRateLaw(points: readonly RatePoint[], names: readonly SumConstant[]): RateFit | KineticsRefusal {
  const refusal = refusalOf(points, names)
  if (refusal) return refusal
  const columns = names.map(name => points.map(p => RATE_TERMS[name].factor(p.conditions)))
  const y = points.map(p => p.rate_per_s)
  const known = points[0]!.se_per_s !== null
  const sigma = points.map(p => p.se_per_s ?? p.rate_per_s)
  if (!solveWeighted(columns, y, sigma)) return refuseKinetics('indistinguishable', `The terms ${names.map(n => RATE_TERMS[n].label).join(', ')} cannot be told apart under these conditions.`, 'Acid and metal varied independently, or fewer terms.')
  const best = solveNonNegative(columns, y, sigma)
  const dof = points.length - names.length
  const variance = known ? Math.max(1, best.chi2 / dof) : best.chi2 / dof
  const problem: NonNegativeProblem = { columns, y, sigma, variance, dof }
  const active = solveWeighted(best.active.map(j => columns[j]!), y, sigma)!
  const rise = variance * tQuantile(0.95, dof) ** 2
  const terms = names.map((name, j): FittedTerm => {
    const upper95 = upperBound95(problem, best, j)
    const at = best.active.indexOf(j)
    const seen = at >= 0 && profileChi2(problem, j, 0) - best.chi2 > rise
    return seen ? { name, value: best.values[j]!, kind: '=', se: Math.sqrt(variance * active.covariance[at]![at]!), upper95 } : { name, value: upper95, kind: '<', se: null, upper95 }
  })
  const correlation = (a: SumConstant, b: SumConstant): number => {
    const [i, j] = [best.active.indexOf(names.indexOf(a)), best.active.indexOf(names.indexOf(b))]
    return i < 0 || j < 0 ? 0 : active.covariance[i]![j]! / Math.sqrt(active.covariance[i]![i]! * active.covariance[j]![j]!)
  }
  const pHs = points.map(p => p.conditions.pH)
  return { ok: true, terms, chi2: best.chi2, dof, pHMin: Math.min(...pHs), pHMax: Math.max(...pHs), temperature_K: points.reduce((s, p) => s + p.conditions.temperature_K, 0) / points.length, correlation }
}

/** The fitted terms as a rate law that can be carried to other conditions: bounds stay bounds, so a half-life can come out as "at least". */
export function lawOfFit(fit: RateFit, enthalpy: { readonly kJ_per_mol: number | null, readonly se_kJ_per_mol: number | null }): RateLaw {
  const constants = fit.terms.map((term): RateConstant => ({
    name: term.name, value: term.value, kind: term.kind, se: term.se, temperature_K: fit.temperature_K, pHMin: fit.pHMin, pHMax: fit.pHMax,
    enthalpy_kJ_per_mol: enthalpy.kJ_per_mol, enthalpy_se_kJ_per_mol: enthalpy.se_kJ_per_mol, evidenceId: term.name,
  }))
  return { form: 'sum', constants, correlation: (a, b) => fit.correlation(a as SumConstant, b as SumConstant) }
}

/**
 * Rates that level off with acid or with one metal: k_obs = (k0 + k1·K·x)/(1 + K·x), x = [H+] or [M], by variable projection over ln K with k0 and k1 not below zero.
 * @source É. Tóth, E. Brücher, I. Lázár, I. Tóth, Inorg. Chem. 33, 4070 (1994), from memory
 */
import { tQuantile } from '../statistics'
import type { RateValue } from './firstOrder'
import { refuseKinetics, solveNonNegative, solveWeighted, type KineticsRefusal } from './weightedLinear'

export interface SaturationPoint { readonly conc_M: number, readonly rate_per_s: number, readonly se_per_s: number | null }
export interface SaturationFit {
  readonly ok: true
  readonly k0_per_s: { readonly value: number, readonly upper95: number }
  readonly k1_per_s: RateValue
  readonly binding_per_M: RateValue
  readonly chi2: number
  readonly dof: number
}

/** Fits the form; refused where the rates do not level off, because then only the product k1·K is determined. */
export function fitSaturation(points: readonly SaturationPoint[]): SaturationFit | KineticsRefusal {
  const bad = points.findIndex(p => !(p.conc_M > 0 && p.rate_per_s > 0 && Number.isFinite(p.rate_per_s) && (p.se_per_s === null || p.se_per_s > 0)))
  if (bad >= 0) return refuseKinetics('badPoint', `Point ${bad + 1}: concentration, rate or error is not above zero.`, 'Concentrations, rates and errors above zero.')
  if (new Set(points.map(p => p.conc_M)).size < 5) return refuseKinetics('tooFewPoints', 'Fewer than five concentrations.', 'At least five different concentrations.')
  const known = points.every(p => p.se_per_s !== null)
  if (!known && points.some(p => p.se_per_s !== null)) return refuseKinetics('mixedErrors', 'Some rates have an error and some have none.', 'An error for every rate, or for none.')
  const [x, y, sigma] = [points.map(p => p.conc_M), points.map(p => p.rate_per_s), points.map(p => p.se_per_s ?? p.rate_per_s)]
  const columns = (K: number): number[][] => [x.map(c => 1 / (1 + K * c)), x.map(c => K * c / (1 + K * c))]
  const at = (u: number): number => solveNonNegative(columns(Math.exp(u)), y, sigma).chi2
  const [from, to] = [Math.log(1e-4 / Math.max(...x)), Math.log(1e4 / Math.min(...x))]
  const u = leastAt(at, from, to)
  const chi2 = at(u)
  const dof = points.length - 3
  const variance = known ? Math.max(1, chi2 / dof) : chi2 / dof
  const line = solveNonNegative([x.map(() => 1), x], y, sigma)
  const rise = variance * tQuantile(0.95, dof) ** 2
  const unlevelled = refuseKinetics('doesNotLevelOff', 'A straight line describes the rates as well: only the product of rate and binding constant is determined.', 'Concentrations up to and above half saturation, or the sum form.')
  if (line.chi2 - chi2 <= rise) return unlevelled
  const [k0, k1] = solveNonNegative(columns(Math.exp(u)), y, sigma).values as [number, number]
  const K = Math.exp(u)
  // columns for k0, ln k1 and ln K: logarithms because both are positive
  const jacobian = [x.map(c => 1 / (1 + K * c)), x.map(c => k1 * K * c / (1 + K * c)), x.map(c => (k1 - k0) * K * c / (1 + K * c) ** 2)]
  const full = k0 > 0 ? solveWeighted(jacobian, y, sigma) : solveWeighted(jacobian.slice(1), y, sigma)
  if (!full || !(k1 > 0)) return unlevelled
  const [se1, seK] = full.covariance.map((row, i) => Math.sqrt(variance * row[i]!)).slice(-2) as [number, number]
  const own = (value: number, relative: number): RateValue => {
    const half = tQuantile(0.975, dof) * relative
    return { value, kind: '=', se: value * relative, interval: [value * Math.exp(-half), value * Math.exp(half)] }
  }
  return { ok: true, k0_per_s: { value: k0, upper95: upperOfK0(x, y, sigma, { from, to, limit: chi2 + rise, k0 }) }, k1_per_s: own(k1, se1), binding_per_M: own(K, seK), chi2, dof }
}

function leastAt(f: (u: number) => number, from: number, to: number): number {
  let [low, high] = [from, to]
  for (let level = 0; level < 10; level++) {
    const grid = Array.from({ length: 41 }, (_, i) => low + (high - low) * i / 40)
    const values = grid.map(f)
    const at = values.indexOf(Math.min(...values))
    low = grid[Math.max(0, at - 1)]!
    high = grid[Math.min(40, at + 1)]!
  }
  return (low + high) / 2
}

interface BoundSearch { readonly from: number, readonly to: number, readonly limit: number, readonly k0: number }

/** One-sided 95 % bound of k0 with k1 and K refitted. */
function upperOfK0(x: readonly number[], y: readonly number[], sigma: readonly number[], search: BoundSearch): number {
  const profile = (k0: number): number => {
    const at = (u: number): number => {
      const K = Math.exp(u)
      return solveNonNegative([x.map(c => K * c / (1 + K * c))], y.map((v, i) => v - k0 / (1 + K * x[i]!)), sigma).chi2
    }
    return at(leastAt(at, search.from, search.to))
  }
  let low = search.k0
  let high = Math.max(...y)
  for (let i = 0; i < 50 && profile(high) < search.limit; i++) high *= 2
  for (let i = 0; i < 40; i++) {
    const middle = (low + high) / 2
    if (profile(middle) < search.limit) low = middle
    else high = middle
  }
  return high
}

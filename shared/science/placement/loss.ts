/**
 * The share of the metal that lets go before the agent is eliminated.
 *
 * Two compartments, x₁ (plasma and the fast part) and x₂ (the slow part), with the dose in x₁ at t = 0:
 *
 *   dx₁/dt = −(k_el + k_in + k_d)·x₁ + k_out·x₂
 *   dx₂/dt =             k_in·x₁ − (k_out + k_d)·x₂
 *
 * k_d is the dissociation rate, the same in both. The slow part is described by the share f of the dose that enters it when nothing
 * dissociates, f = k_in/(k_in + k_el), and by its half-life, k_out = ln 2/t½. Integrating from 0 to ∞ turns the system into two linear
 * equations for X = ∫x dt (all of x is gone at the end):
 *
 *   (k_el + k_in + k_d)·X₁ − k_out·X₂ = 1,   −k_in·X₁ + (k_out + k_d)·X₂ = 0
 *
 * and loss = k_d·(X₁ + X₂). With ρ = X₂/X₁ = k_in/(k_out + k_d) the first equation becomes X₁·(k_el + k_d·(1 + ρ)) = 1, so
 *
 *   loss = κ/(κ + k_el),  κ = k_d·(1 + ρ)
 *
 * without a subtraction. Limits: f = 0 gives k_d/(k_d + k_el); k_d → 0 multiplies that by 1 + f/(1 − f)·k_el/k_out (0.5 % at 30 days with
 * an elimination half-life of 1.6 h: 3.3 times; at one year: 28 times); k_d → ∞ or k_el → 0 gives 1.
 */
import { logSpread, type RateValue } from '../kinetics/firstOrder'

export interface Residence {
  /** Half-life of elimination, s. */
  readonly eliminationHalfLife_s: number
  /** Share of the dose that enters the slow part, 0 to below 1; 0 switches it off. */
  readonly slowShare_frac: number
  readonly slowHalfLife_s: number
}

/** Fraction lost for a dissociation rate. NaN outside the domain (k_d ≥ 0, half-lives > 0, 0 ≤ share < 1). */
export function lossFraction(kd_per_s: number, residence: Residence): number {
  const { eliminationHalfLife_s, slowShare_frac, slowHalfLife_s } = residence
  if (!(kd_per_s >= 0) || !(eliminationHalfLife_s > 0) || !(slowHalfLife_s > 0) || !(slowShare_frac >= 0) || !(slowShare_frac < 1)) return NaN
  if (kd_per_s === Infinity) return 1
  const kEl = Math.LN2 / eliminationHalfLife_s
  const kIn = kEl * slowShare_frac / (1 - slowShare_frac)
  const effective = kd_per_s * (1 + kIn / (Math.LN2 / slowHalfLife_s + kd_per_s))
  return effective / (effective + kEl)
}

/** ∂ ln(loss)/∂ ln(k_d): 1 while little is lost, towards 0 when nearly all is. */
export function lossSlope(kd_per_s: number, residence: Residence): number {
  const { eliminationHalfLife_s, slowShare_frac, slowHalfLife_s } = residence
  const kEl = Math.LN2 / eliminationHalfLife_s
  const kIn = kEl * slowShare_frac / (1 - slowShare_frac)
  const out = Math.LN2 / slowHalfLife_s + kd_per_s
  const effective = kd_per_s * (1 + kIn / out)
  const effectiveSlope = 1 - (kd_per_s * kIn / (out * out)) / (1 + kIn / out)
  return effectiveSlope * kEl / (effective + kEl)
}

/** Loss of a rate with its error: the interval is carried exactly (loss rises with k_d), the standard error by its slope. */
export function lossOf(rate: RateValue, residence: Residence): RateValue {
  const value = lossFraction(rate.value, residence)
  return {
    value, kind: rate.kind,
    se: rate.se === null ? null : value * lossSlope(rate.value, residence) * rate.se / rate.value,
    interval: rate.interval === null ? null : [lossFraction(rate.interval[0], residence), lossFraction(rate.interval[1], residence)],
  }
}

/** Spread of ln(loss) from the spread of ln(k_d), for ellipses; null where the rate has no error. */
export function lossLogSpread(rate: RateValue, residence: Residence): number | null {
  return rate.se === null ? null : logSpread(rate.value, rate.se) * lossSlope(rate.value, residence)
}

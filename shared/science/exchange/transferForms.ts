import { PROTON_GAMMA_rad_per_s_T } from '../constants'
import { exactExp } from '../exactMath'

/**
 * Saturation transfer between a small pool and water, without direct saturation of water.
 * x: pool protons over water protons; k: exchange rate from the pool to water, s⁻¹; α: how well the pool is saturated.
 * @source McMahon et al., Magn. Reson. Med. 55, 836 (2006), with x·k·α in place of x·k in the denominator and in the exponent, which is exact where the printed form needs α near 1
 */

/** Concentration of water, mol/L, which the fraction of protons is counted by. Common practice, no source: pure water has 55.3 at 25 °C and 55.1 at 37 °C. */
export const WATER_M = 55.5

/** ω1 = γ·B1, rad/s. */
export const omega1_rad_per_s = (b1_uT: number): number => b1_uT * 1e-6 * PROTON_GAMMA_rad_per_s_T

/** α = ω1²/(ω1² + k·(k + R2s)). 0 without B1; 1 without exchange and with B1. NaN for a negative rate. */
export function saturationEfficiency(k_per_s: number, { b1_uT, r2s_per_s }: { b1_uT: number, r2s_per_s: number }): number {
  if (!(k_per_s >= 0) || !(r2s_per_s >= 0)) return NaN
  const square = omega1_rad_per_s(b1_uT) ** 2
  return square === 0 ? 0 : square / (square + k_per_s * (k_per_s + r2s_per_s))
}

/** x = n·c/(2·55.5 mol/L). @param protons exchanging protons of that shift in one molecule @param conc_mM concentration of the agent */
export const protonFraction = (protons: number, conc_mM: number): number => (protons * conc_mM * 1e-3) / (2 * WATER_M)

/** What is known of the water and the pool beside k and x. */
export interface TransferSettings {
  readonly r1w_per_s: number
  /** Transverse relaxation of the pool; 0 = neglected, and said so. */
  readonly r2s_per_s: number
  /** Mz of water at the start of saturation over its equilibrium: 1 after 5·T1, 1 − e^(−R1w·t) after a recovery of t. */
  readonly start: number
}

/** steady: PTR at steady state; buildUp: PTR at a saturation time; inverse: MTR_Rex at steady state. */
export type TransferForm = 'steady' | 'buildUp' | 'inverse'

/** What each form assumes, as printed beside its result. */
export const TRANSFER_ASSUMPTIONS: Readonly<Record<TransferForm, string>> = {
  steady: 'Steady state (R1w·tsat of 5 or more), no direct saturation at the pool, ω1 far below the shift of the pool; PTR = x·k·α/(R1w + x·k·α).',
  buildUp: 'One rate of build-up, R1w + x·k·α, at every saturation time; no direct saturation at the pool; saturation of the pool itself set up at once.',
  inverse: 'Steady state (R1w·tsat of 5 or more); direct saturation is the same on both sides of water and divided out; MTR_Rex = x·k·α/R1w.',
}

/** PTR = 1 − Z/Z(unsaturated, same timing) or MTR_Rex of a pool, by the form asked for. NaN out of domain. */
export function transferAt(form: TransferForm, { k_per_s, x, b1_uT, tsat_s }: { k_per_s: number, x: number, b1_uT: number, tsat_s: number }, settings: TransferSettings): number {
  const { r1w_per_s, start } = settings
  const out = x * k_per_s * saturationEfficiency(k_per_s, { b1_uT, r2s_per_s: settings.r2s_per_s })
  if (!(r1w_per_s > 0)) return NaN
  if (form === 'inverse') return out / r1w_per_s
  const rate = r1w_per_s + out
  if (form === 'steady') return out / rate
  const steady = r1w_per_s / rate
  const saturated = steady + (start - steady) * exactExp(-rate * tsat_s)
  const free = 1 + (start - 1) * exactExp(-r1w_per_s * tsat_s)
  return 1 - saturated / free
}

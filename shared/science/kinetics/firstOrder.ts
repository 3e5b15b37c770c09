/**
 * First-order loss: half-life and back, with the interval taken from ln k (a rate constant is positive, and so is its half-life).
 */

import { exactExp, exactLog } from '../exactMath'

/** 97.5 % point of the normal distribution. */
const Z_95 = 1.959963984540054

export interface RateValue {
  readonly value: number
  readonly kind: '=' | '<' | '>'
  readonly se: number | null
  readonly interval: readonly [number, number] | null
}

/** Half-life ln 2/k in seconds. NaN for a negative rate constant; Infinity at 0. */
export function halfLife_s(rate_per_s: number): number {
  return rate_per_s >= 0 ? Math.LN2 / rate_per_s : NaN
}

/** Rate constant of a half-life, s⁻¹. NaN unless above zero. */
export function rateOfHalfLife_per_s(halfLife_s: number): number {
  return halfLife_s > 0 ? Math.LN2 / halfLife_s : NaN
}

/** Fraction left after a time. */
export function fractionLeft(rate_per_s: number, time_s: number): number {
  return Math.exp(-rate_per_s * time_s)
}

/** Time until `fraction` is left, s. NaN unless 0 < fraction ≤ 1. */
export function timeToFraction_s(rate_per_s: number, fraction: number): number {
  return fraction > 0 && fraction <= 1 ? -Math.log(fraction) / rate_per_s : NaN
}

/** Spread of ln v: σ = √ln(1 + (s/v)²), the log-normal with median v whose relative width is that of v ± s. */
export function logSpread(value: number, se: number): number {
  return value > 0 && se >= 0 ? Math.sqrt(exactLog(1 + (se / value) ** 2)) : NaN
}

/** 95 % interval of a positive quantity from its standard error, log-normal about the value. */
export function logInterval(value: number, se: number): [number, number] {
  const half = Z_95 * logSpread(value, se)
  return [value * exactExp(-half), value * exactExp(half)]
}

/** Half-life of a rate constant: "k at most" becomes "half-life at least", and the interval turns over. */
export function halfLifeOf(rate: RateValue): RateValue {
  const value = halfLife_s(rate.value)
  const kind = rate.kind === '<' ? '>' : rate.kind === '>' ? '<' : '='
  const interval = rate.interval === null ? null : [halfLife_s(rate.interval[1]), halfLife_s(rate.interval[0])] as const
  return { value, kind, se: rate.se === null ? null : value * rate.se / rate.value, interval }
}

import { exactExp } from '../exactMath'
import type { SolutePool } from './poolSystem'

/**
 * Water under irradiation as one decay with R1ρ, to which every pool adds a Lorentzian line. An approximation: far from water (Δω ≫ ω1) and small pools. Used to find
 * starts and brackets, never as a result.
 * @source Zaiss & Bachert, NMR Biomed. 26, 507 (2013), from memory
 */

/** Line that a pool adds to R1ρ for a proton ratio of 1, s⁻¹. @param difference_rad_per_s place of the pool minus that of the irradiation @param square ω1² */
export function exchangeLine({ exchange_per_s: k, rate2_per_s: r2 }: Pick<SolutePool, 'exchange_per_s' | 'rate2_per_s'>, square: number, difference_rad_per_s: number): number {
  if (!(k > 0) || square === 0) return 0
  const halfWidthSquare = (square * (k + r2)) / k + (k + r2) ** 2
  return ((k * square) / (square + k * (k + r2))) * (halfWidthSquare / (halfWidthSquare + difference_rad_per_s * difference_rad_per_s))
}

export interface Decay {
  /** cos² of the angle between the effective field and the main field. */
  readonly cosSquare: number
  readonly rate1_per_s: number
  readonly duration_s: number
  readonly initial_frac: number
}

/** Z after the block, for a decay with `rate_per_s` = R1ρ. */
export function zOfRate(rate_per_s: number, { cosSquare, rate1_per_s, duration_s, initial_frac }: Decay): number {
  const steady = (cosSquare * rate1_per_s) / rate_per_s
  return duration_s === Infinity ? steady : steady + (cosSquare * initial_frac - steady) * exactExp(-rate_per_s * duration_s)
}

const BISECTIONS = 40
/** R1ρ above which nothing is left of the signal of any tissue or solution. */
const LARGEST_RATE_per_s = 1e4

/** R1ρ that gives this Z: `zOfRate` falls with the rate as long as the start is not below the steady state. Null where none between R1/20 and 10⁴ s⁻¹ does. */
export function rateOfZ(z: number, decay: Decay): number | null {
  let low = decay.rate1_per_s / 20
  let high = LARGEST_RATE_per_s
  if (!(zOfRate(low, decay) > z && zOfRate(high, decay) < z)) return null
  for (let turn = 0; turn < BISECTIONS; turn++) {
    // The geometric mean: rates run over five decades.
    const middle = Math.sqrt(low * high)
    if (zOfRate(middle, decay) > z) low = middle
    else high = middle
  }
  return Math.sqrt(low * high)
}

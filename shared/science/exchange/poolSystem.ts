import { PROTON_GAMMA_rad_per_s_T } from '../constants'
import { MOST_SOLUTES } from './kernels'

/** Protons that exchange with water, at one place of the spectrum. */
export interface SolutePool {
  /** Shift from water, ppm, signed. */
  readonly shift_ppm: number
  readonly rate1_per_s: number
  readonly rate2_per_s: number
  /** Rate from the solute to water, k; the rate back is k·ratio. */
  readonly exchange_per_s: number
  /** Protons of the pool over protons of water, x: see `protonFraction`. */
  readonly ratio: number
}

/** Water and one to three pools that exchange with it but not with each other. */
export interface PoolSystem {
  readonly field_T: number
  readonly water: { readonly rate1_per_s: number, readonly rate2_per_s: number }
  readonly solutes: readonly SolutePool[]
  /** Place of water on the axis of the offsets, ppm; default 0. The solutes move with it. */
  readonly waterShift_ppm?: number
}

/** A block of constant irradiation. */
export interface Block {
  readonly b1_uT: number
  /** ∞: the steady state. */
  readonly duration_s: number
  /** Magnetisation along the field before the block over its equilibrium; default 1. */
  readonly initial_frac?: number
}

/** rad s⁻¹ for 1 ppm at this field. */
export function ppmToRadPerS(field_T: number): number {
  return PROTON_GAMMA_rad_per_s_T * field_T * 1e-6
}

const positive = (x: number): boolean => x > 0 && x < Infinity
const notNegative = (x: number): boolean => x >= 0 && x < Infinity

/** What makes the equations impossible or is outside their domain; null when nothing does. */
export function faultOfSystem(system: PoolSystem): string | null {
  const { water, solutes } = system
  if (!positive(system.field_T)) return 'The field must be above 0 T.'
  if (solutes.length < 1 || solutes.length > MOST_SOLUTES) return `There must be 1 to ${MOST_SOLUTES} pools beside water.`
  if (!positive(water.rate1_per_s) || !positive(water.rate2_per_s)) return 'R1 and R2 of water must be above 0 s⁻¹.'
  if (!Number.isFinite(system.waterShift_ppm ?? 0)) return 'The place of water must be a number of ppm.'
  for (const [i, pool] of solutes.entries()) {
    if (!positive(pool.rate1_per_s) || !positive(pool.rate2_per_s)) return `R1 and R2 of pool ${i + 1} must be above 0 s⁻¹.`
    if (!notNegative(pool.exchange_per_s) || !notNegative(pool.ratio)) return `Exchange rate and proton ratio of pool ${i + 1} must not be below 0.`
    if (!Number.isFinite(pool.shift_ppm)) return `The shift of pool ${i + 1} must be a number of ppm.`
  }
  return null
}

/** The same of a block: B1 may be zero, the duration may be infinite. */
export function faultOfBlock({ b1_uT, duration_s, initial_frac = 1 }: Block): string | null {
  if (!notNegative(b1_uT)) return 'B1 must not be below 0 µT.'
  if (!(duration_s >= 0)) return 'The saturation time must not be below 0 s.'
  return Number.isFinite(initial_frac) ? null : 'The magnetisation before saturation must be a number.'
}

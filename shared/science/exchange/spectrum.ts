import { createPropagator, propagate, setOffset, setSystem, type Propagator } from './propagator'
import { ppmToRadPerS, type Block, type PoolSystem } from './poolSystem'

const idle = new Map<number, Propagator>()

/** Work space for so many pools, kept from call to call: nothing here calls itself. */
export function propagatorOf(pools: number): Propagator {
  const kept = idle.get(pools)
  if (kept) return kept
  const made = createPropagator(pools)
  idle.set(pools, made)
  return made
}

/**
 * Magnetisation of water along the field after a block of constant irradiation at each offset, over its equilibrium: Z.
 * @param offsets_ppm place of the irradiation, ppm
 * @param out filled and returned when given
 * @returns NaN where a number given is NaN; see `faultOfSystem` and `faultOfBlock` for the domain, which is not checked here
 * @source McConnell, J. Chem. Phys. 28, 430 (1958), from memory
 * @example cwSpectrum({ field_T: 7, water: { rate1_per_s: 0.5, rate2_per_s: 2 }, solutes: [{ shift_ppm: 3.5, rate1_per_s: 1, rate2_per_s: 66.67, exchange_per_s: 30, ratio: 0.001 }] }, { b1_uT: 1, duration_s: 10 }, [3.5])[0] // 0.93986
 */
export function cwSpectrum(system: PoolSystem, block: Block, offsets_ppm: ArrayLike<number>, out = new Float64Array(offsets_ppm.length)): Float64Array {
  const state = propagatorOf(system.solutes.length + 1)
  setSystem(state, system, block.b1_uT)
  const { n, roots } = state
  const perPpm = ppmToRadPerS(system.field_T)
  const initial = block.initial_frac ?? 1
  const m = new Float64Array(n)
  for (let i = 0; i < offsets_ppm.length; i++) {
    m.fill(0)
    for (let p = 0; p < state.pools; p++) m[3 * p + 2] = initial * roots[p]!
    propagate(state, m, setOffset(state, offsets_ppm[i]! * perPpm), block.duration_s)
    out[i] = m[2]!
  }
  return out
}

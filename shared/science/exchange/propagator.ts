/**
 * Bloch–McConnell equations of water and 1 to 3 pools in exchange with it, by M(t) = M_ss + e^{At}·(M₀ − M_ss).
 *
 *     dMx = −R2·Mx − Δω·My   dMy = Δω·Mx − R2·My − ω1·Mz   dMz = ω1·My − R1·(Mz − x)   Δω = (shift − offset)·γ·B0
 *
 * with k from a pool to water and k·x back. Each pool is scaled by 1/√x, which makes the exchange symmetric (detailed balance). With P = diag(1, −1, 1) per pool
 * G = P·A is then symmetric, and so is P·f(A) for every function f: half of each product is enough. e^{At} is a Taylor polynomial of degree 12 of A·t/2^s, squared
 * s times; the backward error is below 2⁻⁵³ for a norm up to 0.29 (Al-Mohy & Higham, SIAM J. Sci. Comput. 33, 488 (2011), whose θ₁₂ is rounded down here).
 * Only + − × ÷ and √ are used: every engine gives the same bits.
 */
import { kernelOf, type Kernel } from './kernels'
import { packedAt } from './packed'
import { polynomial } from './polynomial'
import { ppmToRadPerS, type PoolSystem } from './poolSystem'
import { omega1_rad_per_s } from './transferForms'

const LARGEST_NORM = 0.29
/** Of the squarings so many are made on the vector, as products of the matrix with it: cheaper for one vector. */
const SQUARINGS_OF_VECTOR = 2
const X = 0
const Y = 1
const Z = 2

/** Work space of one number of pools, filled for one system and irradiation at a time. */
export interface Propagator {
  readonly pools: number
  readonly n: number
  readonly kernel: Kernel
  /** G of the equations. */
  readonly matrix: Float64Array
  /** √x per pool, water 1. */
  readonly roots: Float64Array
  /** Rate out of each pool: k, or Σ k·x for water. */
  readonly out_per_s: Float64Array
  /** Larmor place of each pool minus that of the zero offset, rad s⁻¹. */
  readonly places: Float64Array
  /** Bound of the row sums of |A|, |Δω| left out. */
  readonly norms: Float64Array
  readonly source: Float64Array
  readonly steady: Float64Array
  readonly start: Float64Array
  readonly other: Float64Array
  /** Place of entry (i, j) in the packed triangle, at i·n + j. */
  readonly at: Int32Array
  readonly scratch: readonly Float64Array[]
}

export function createPropagator(pools: number): Propagator {
  const n = 3 * pools
  const size = (n * (n + 1)) / 2
  return {
    pools, n, kernel: kernelOf(pools), matrix: new Float64Array(size), roots: new Float64Array(pools), out_per_s: new Float64Array(pools), places: new Float64Array(pools),
    norms: new Float64Array(pools), source: new Float64Array(n), steady: new Float64Array(n), start: new Float64Array(n), other: new Float64Array(n),
    at: Int32Array.from({ length: n * n }, (_, k) => packedAt(n, Math.min(Math.floor(k / n), k % n), Math.max(Math.floor(k / n), k % n))),
    scratch: Array.from({ length: 12 }, () => new Float64Array(size)),
  }
}

/** Fills everything that does not depend on the offset. */
export function setSystem(state: Propagator, system: PoolSystem, b1_uT: number): void {
  const { n, matrix, roots, out_per_s: out, places, norms, source } = state
  const perPpm = ppmToRadPerS(system.field_T)
  const rotation = omega1_rad_per_s(b1_uT)
  const base = system.waterShift_ppm ?? 0
  roots[0] = 1
  out[0] = 0
  let sumOfCouplings = 0
  system.solutes.forEach((pool, s) => {
    const root = Math.sqrt(pool.ratio)
    const coupling = pool.exchange_per_s * root
    roots[s + 1] = root
    out[s + 1] = pool.exchange_per_s
    out[0]! += pool.exchange_per_s * pool.ratio
    sumOfCouplings += coupling
    for (const [axis, sign] of [[X, 1], [Y, -1], [Z, 1]] as const) matrix[packedAt(n, axis, 3 * (s + 1) + axis)] = sign * coupling
    norms[s + 1] = coupling
  })
  norms[0] = sumOfCouplings
  for (let p = 0; p < state.pools; p++) {
    const { rate1_per_s: r1, rate2_per_s: r2 } = p === 0 ? system.water : system.solutes[p - 1]!
    const o = 3 * p
    matrix[packedAt(n, o + X, o + X)] = -(r2 + out[p]!)
    matrix[packedAt(n, o + Y, o + Y)] = r2 + out[p]!
    matrix[packedAt(n, o + Y, o + Z)] = rotation
    matrix[packedAt(n, o + Z, o + Z)] = -(r1 + out[p]!)
    source[o + Z] = r1 * roots[p]!
    places[p] = (p === 0 ? base : base + system.solutes[p - 1]!.shift_ppm) * perPpm
    norms[p]! += out[p]! + Math.max(r1, r2) + rotation
  }
}

/** Enters the offset, in rad s⁻¹. @returns a bound of every row sum of |A| */
export function setOffset(state: Propagator, offset_rad_per_s: number): number {
  const { n, matrix, places, norms, at } = state
  let largest = 0
  for (let p = 0; p < state.pools; p++) {
    const difference = places[p]! - offset_rad_per_s
    matrix[at[3 * p * (n + 1) + 1]!] = -difference
    const norm = norms[p]! + Math.abs(difference)
    if (norm > largest) largest = norm
  }
  return largest
}

/** Steady state of the matrix entered, into `steady`. */
export function solveSteady(state: Propagator): void {
  const { kernel, steady, matrix, source, n } = state
  kernel.solveSparse(steady, matrix, source)
  for (let i = 0; i < n; i++) steady[i] = -steady[i]!
}

/** How often e^{At} is squared, and t over 2 to that power. */
export function scalingOf(norm: number, duration_s: number): { squarings: number, step_s: number } {
  let squarings = 0
  let step_s = duration_s
  for (let size = norm * duration_s; size > LARGEST_NORM; size *= 0.5) {
    squarings++
    step_s *= 0.5
  }
  return { squarings, step_s }
}

/** g^(2^times), in one of two work arrays. */
export function squareTimes({ kernel, scratch }: Propagator, g: Float64Array, times: number): Float64Array {
  let from = g
  for (let turn = 0; turn < times; turn++) {
    const to = scratch[turn % 2]!
    kernel.square(to, from)
    from = to
  }
  return from
}

/** M ← M_ss + e^{At}·(M − M_ss) for the matrix entered, M scaled by 1/√x per pool. */
export function propagate(state: Propagator, m: Float64Array, norm: number, duration_s: number): void {
  const { kernel, steady, start, n } = state
  solveSteady(state)
  if (duration_s === Infinity) {
    m.set(steady)
    return
  }
  const { squarings, step_s } = scalingOf(norm, duration_s)
  const ofVector = Math.min(SQUARINGS_OF_VECTOR, squarings)
  const g = squareTimes(state, polynomial(state, step_s), squarings - ofVector)
  let v = start
  let other = state.other
  for (let i = 0; i < n; i++) v[i] = m[i]! - steady[i]!
  for (let turn = 1 << ofVector; turn > 0; turn--) {
    kernel.apply(other, g, v)
    const swap = v
    v = other
    other = swap
  }
  for (let i = 0; i < n; i++) m[i] = steady[i]! + v[i]!
}

/**
 * Derivatives of Z by every parameter at once, exact. Z = e_zᵀ·(M_ss + E·(M₀ − M_ss)) with E = e^{At}: the sensitivity to the whole matrix is the derivative of the
 * exponential in the direction (M₀ − M_ss)·e_zᵀ, made symmetric in G form, which costs about three exponentials however many parameters there are.
 * @source Al-Mohy & Higham, SIAM J. Matrix Anal. Appl. 30, 1639 (2009): the derivative by scaling and squaring, from memory
 */
import { polynomialAndDerivative } from './polynomial'
import { scalingOf, setOffset, setSystem, solveSteady, type Propagator } from './propagator'
import { propagatorOf } from './spectrum'
import { ppmToRadPerS, type Block, type PoolSystem } from './poolSystem'
import { omega1_rad_per_s } from './transferForms'

/** Columns of the derivatives: these, then five for each solute. */
export const COLUMN = { waterRate1: 0, waterRate2: 1, waterShift: 2, irradiation: 3 } as const
export const SOLUTE_COLUMN = { shift: 0, longitudinal: 1, transverse: 2, exchange: 3, ratio: 4 } as const
export const soluteColumn = (solute: number, which: keyof typeof SOLUTE_COLUMN): number => 4 + 5 * solute + SOLUTE_COLUMN[which]
export const columnCount = (solutes: number): number => 4 + 5 * solutes

interface Adjoint {
  /** Derivative in G form; null at the steady state, which does not depend on E. */
  readonly d: Float64Array | null
  /** Row z of E. */
  readonly y: Float64Array
  /** Solves Aᵀ·w = e_z − y. */
  readonly w: Float64Array
}

/**
 * Z at each offset and its derivatives.
 * @param z filled with Z
 * @param derivatives filled by column: derivatives[column·count + i], per s⁻¹, per ppm, per µT, per unit ratio
 * @returns the derivative by a ratio of 0 is NaN: the scaling of the pools leaves it undefined there
 */
export function cwSensitivities(system: PoolSystem, block: Block, offsets_ppm: ArrayLike<number>, z: Float64Array, derivatives: Float64Array): void {
  const state = propagatorOf(system.solutes.length + 1)
  setSystem(state, system, block.b1_uT)
  const { n, roots } = state
  const perPpm = ppmToRadPerS(system.field_T)
  const initial = block.initial_frac ?? 1
  const count = offsets_ppm.length
  const v = new Float64Array(n)
  const adjoint = { d: null, y: new Float64Array(n), w: new Float64Array(n) }
  const right = new Float64Array(n)
  for (let i = 0; i < count; i++) {
    const norm = setOffset(state, offsets_ppm[i]! * perPpm)
    solveSteady(state)
    for (let k = 0; k < n; k++) v[k] = (k % 3 === 2 ? initial * roots[(k - 2) / 3]! : 0) - state.steady[k]!
    const found: Adjoint = { ...adjoint, d: block.duration_s === Infinity ? null : derive(state, v, norm, block.duration_s, adjoint.y) }
    if (found.d === null) adjoint.y.fill(0)
    for (let k = 0; k < n; k++) right[k] = (k % 3 === 1 ? -1 : 1) * ((k === 2 ? 1 : 0) - adjoint.y[k]!)
    state.kernel.solveSparse(adjoint.w, state.matrix, right)
    for (let k = 0; k < n; k++) if (k % 3 === 1) adjoint.w[k]! *= -1
    let sum = state.steady[2]!
    for (let k = 0; k < n; k++) sum += adjoint.y[k]! * v[k]!
    z[i] = sum
    gather(state, system, { found, initial, perPpm, at: i, count }, derivatives)
  }
}

/** Fills y with row z of E. @returns the derivative of E in the direction v·e_zᵀ times the duration */
function derive(state: Propagator, v: Float64Array, norm: number, duration_s: number, y: Float64Array): Float64Array {
  const { n, kernel, scratch, at } = state
  const { squarings, step_s } = scalingOf(norm, duration_s)
  const direction = scratch[9]!
  direction.fill(0)
  for (let k = 0; k < n; k++) direction[at[2 * n + k]!] = (k === 2 ? 1 : 0.5) * (k % 3 === 1 ? -1 : 1) * v[k]! * step_s
  let { g, d } = polynomialAndDerivative(state, step_s, direction)
  // Two pairs of work arrays take turns; the polynomial left its results in others.
  for (let turn = 0; turn < squarings; turn++) {
    const square = scratch[turn % 2]!
    const derivative = scratch[2 + (turn % 2)]!
    kernel.squareDerivative(derivative, g, d)
    kernel.square(square, g)
    g = square
    d = derivative
  }
  for (let k = 0; k < n; k++) y[k] = g[at[2 * n + k]!]!
  return d
}

interface Place { readonly found: Adjoint, readonly initial: number, readonly perPpm: number, readonly at: number, readonly count: number }

/** dZ/dA(i, j). A function of its own, not made anew for every point: that costs a tenth of the whole. */
function entry({ n, at, steady }: Propagator, { d, w }: Adjoint, i: number, j: number): number {
  const ofExponential = d === null ? 0 : (j % 3 === 1 ? -1 : 1) * d[at[i * n + j]!]!
  return ofExponential - w[i]! * steady[j]!
}

function trace(state: Propagator, found: Adjoint, o: number): number {
  return entry(state, found, o, o) + entry(state, found, o + 1, o + 1) + entry(state, found, o + 2, o + 2)
}

/** Derivatives by the parameters from those by the entries of A, of the source and of the start. */
function gather(state: Propagator, system: PoolSystem, { found, initial, perPpm, at, count }: Place, out: Float64Array): void {
  const { roots, pools } = state
  const { y, w } = found
  const ofWater = trace(state, found, 0)
  let byRotation = 0
  let byShifts = 0
  for (let p = 0; p < pools; p++) {
    const o = 3 * p
    byRotation += entry(state, found, o + 2, o + 1) - entry(state, found, o + 1, o + 2)
    const byShift = perPpm * (entry(state, found, o + 1, o) - entry(state, found, o, o + 1))
    byShifts += byShift
    const byRate1 = -entry(state, found, o + 2, o + 2) - w[o + 2]! * roots[p]!
    const byRate2 = -entry(state, found, o, o) - entry(state, found, o + 1, o + 1)
    if (p === 0) {
      out[COLUMN.waterRate1 * count + at] = byRate1
      out[COLUMN.waterRate2 * count + at] = byRate2
      continue
    }
    const first = soluteColumn(p - 1, 'shift') * count + at
    const { rate1_per_s: r1, exchange_per_s: k } = system.solutes[p - 1]!
    const root = roots[p]!
    let byCoupling = 0
    for (let axis = 0; axis < 3; axis++) byCoupling += entry(state, found, axis, o + axis) + entry(state, found, o + axis, axis)
    const byRoot = k * byCoupling - w[o + 2]! * r1 + y[o + 2]! * initial
    out[first] = byShift
    out[first + SOLUTE_COLUMN.longitudinal * count] = byRate1
    out[first + SOLUTE_COLUMN.transverse * count] = byRate2
    out[first + SOLUTE_COLUMN.exchange * count] = root * byCoupling - trace(state, found, o) - root * root * ofWater
    out[first + SOLUTE_COLUMN.ratio * count] = byRoot / (2 * root) - k * ofWater
  }
  out[COLUMN.waterShift * count + at] = byShifts
  out[COLUMN.irradiation * count + at] = omega1_rad_per_s(1) * byRotation
}

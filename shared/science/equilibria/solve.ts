/**
 * Free concentrations from mass balances by a damped Newton iteration on the logarithms.
 *
 * In u = ln(free) the balances are the gradient of the convex function F(u) = Σ_j c_j(u) − Σ_k T_k u_k, so there is at most
 * one solution, concentrations are positive by construction, and a step that lowers F is always found. Each step is computed
 * on the most abundant independent species (pivot.ts), which keeps every free concentration, however small, at full precision.
 *
 * @source convexity: A. R. Shapiro & L. S. Shapley, J. SIAM 13, 353 (1965) (from memory).
 */
import { basisServes, pivotBasis, type PivotBasis } from './pivot'
import type { CompiledSystem } from './system'

/** Largest relative error of a balance that is accepted. */
export const BALANCE_TOLERANCE = 1e-12
const ITERATION_LIMIT = 400
/** ln(free) below this is no concentration any more: the totals cannot be met. */
const LOWEST_LN_FREE = -2000

export interface Speciation {
  readonly ok: true
  /** Free concentration by component, mol/L; held components included. */
  readonly free_M: Readonly<Record<string, number>>
  /** Concentration of every species that can exist, free components included; absent ones are 0. */
  readonly species_M: Readonly<Record<string, number>>
  readonly iterations: number
  /** Largest |total − sum| over the sum of absolute terms. */
  readonly balanceError: number
  /** ln(free) of the unknowns: the start for a neighbouring system (a pH sweep). */
  readonly lnFree: Float64Array
}

export interface SpeciationRefused {
  readonly ok: false
  readonly reason: 'notConverged' | 'totalsImpossible'
  readonly message: string
}

interface State {
  readonly u: Float64Array
  readonly c: Float64Array
  readonly objective: number
}

/** Solves a compiled system. `start` holds ln(free) per unknown, from a neighbouring solution. */
export function solveSystem(system: CompiledSystem, start?: Float64Array): Speciation | SpeciationRefused {
  const n = system.unknowns.length
  let state = stateAt(system, start && start.length === n ? Float64Array.from(start) : firstGuess(system))
  let basis = basisFor(system, state.c)
  let settled = false
  for (let iteration = 0; iteration <= ITERATION_LIMIT; iteration++) {
    if (settled || !basisServes(basis, state.c)) basis = basisFor(system, state.c)
    const step = newtonStep(basis, state)
    if (step === null) break
    // the verdict is passed on a basis chosen at the solution: an older one carries rounding of its own in its totals
    const met = step.rowError <= BALANCE_TOLERANCE / 4
    if (met && settled && balanceError(system, state.c) <= BALANCE_TOLERANCE) return speciation(system, state, iteration)
    settled = step.rowError <= 1e-6
    const next = lineSearch(system, state, step)
    if (next === null) break
    if (next.u.some(x => x < LOWEST_LN_FREE)) return { ok: false, reason: 'totalsImpossible', message: 'no set of positive concentrations meets these totals' }
    state = next
  }
  // Rounding can hold a row just above the inner goal; the stated tolerance on every balance still decides.
  const last = newtonStep(basisFor(system, state.c), state)
  if (last !== null && last.rowError <= BALANCE_TOLERANCE && balanceError(system, state.c) <= BALANCE_TOLERANCE) return speciation(system, state, ITERATION_LIMIT)
  return { ok: false, reason: 'notConverged', message: `the balances were not met to ${BALANCE_TOLERANCE} within ${ITERATION_LIMIT} steps` }
}

/** Each free concentration at its total, lowered together until no species towers above the totals. */
function firstGuess(system: CompiledSystem): Float64Array {
  const u = Float64Array.from(system.totals_M, t => Math.log(t > 0 ? t : 1e-7))
  const n = u.length
  const m = system.names.length
  const ceiling = Math.max(...system.totals_M.map(Math.abs), 1e-7)
  for (let round = 0; round < 200; round++) {
    const c = concentrations(system, u)
    let top = 0
    for (let j = 1; j < m; j++) if (c[j]! > c[top]!) top = j
    if (!(c[top]! > 1e3 * ceiling)) break
    let power = 0
    for (let k = 0; k < n; k++) power += Math.max(0, system.powers[k * m + top]!)
    const drop = Math.min(20, Math.max(0.5, Math.log(c[top]! / ceiling) / Math.max(power, 1)))
    for (let k = 0; k < n; k++) if (system.powers[k * m + top]! > 0) u[k]! -= drop
  }
  return u
}

function concentrations(system: CompiledSystem, u: Float64Array): Float64Array {
  const m = system.names.length
  const c = Float64Array.from(system.lnBeta)
  for (let k = 0; k < u.length; k++) for (let j = 0; j < m; j++) c[j]! += system.powers[k * m + j]! * u[k]!
  for (let j = 0; j < m; j++) c[j] = Math.exp(c[j]!)
  return c
}

function stateAt(system: CompiledSystem, u: Float64Array): State {
  const c = concentrations(system, u)
  let objective = 0
  for (let j = 0; j < c.length; j++) objective += c[j]!
  for (let k = 0; k < u.length; k++) objective -= system.totals_M[k]! * u[k]!
  return { u, c, objective }
}

interface Step {
  readonly du: Float64Array
  /** Slope of F along the step (negative). */
  readonly slope: number
  readonly rowError: number
}

function basisFor(system: CompiledSystem, c: Float64Array): PivotBasis {
  return pivotBasis(system.powers, system.totals_M, Array.from(c.keys()).sort((a, b) => c[b]! - c[a]!))
}

/** One Newton step in the pivot basis, carried back to the components; null where the equations are singular. */
function newtonStep({ rows, totals }: PivotBasis, state: State): Step | null {
  const n = state.u.length
  const m = state.c.length
  const gap = new Float64Array(n)
  const hessian = new Float64Array(n * n)
  let rowError = 0
  for (let k = 0; k < n; k++) {
    let sum = 0
    let size = Math.abs(totals[k]!)
    for (let j = 0; j < m; j++) {
      const term = rows[k * m + j]! * state.c[j]!
      if (term === 0) continue
      sum += term
      size += Math.abs(term)
      for (let l = 0; l <= k; l++) hessian[k * n + l]! += term * rows[l * m + j]!
    }
    gap[k] = totals[k]! - sum
    rowError = Math.max(rowError, size === 0 ? 0 : Math.abs(gap[k]!) / size)
  }
  const dv = solveScaledCholesky(hessian, gap, n)
  if (dv === null) return null
  const du = new Float64Array(n)
  let slope = 0
  for (let k = 0; k < n; k++) {
    slope -= gap[k]! * dv[k]!
    // the free form of component i is species i, so its change is column i of the rows
    for (let i = 0; i < n; i++) du[i]! += rows[k * m + i]! * dv[k]!
  }
  return { du, slope, rowError }
}

/** Solves H x = g for a symmetric positive definite H (lower triangle given), scaled to a unit diagonal. */
function solveScaledCholesky(hessian: Float64Array, gap: Float64Array, n: number): Float64Array | null {
  const scale = Float64Array.from({ length: n }, (_, k) => 1 / Math.sqrt(hessian[k * n + k]!))
  if (!scale.every(Number.isFinite)) return null
  const l = new Float64Array(n * n)
  for (let i = 0; i < n; i++) {
    for (let k = 0; k <= i; k++) {
      let sum = hessian[i * n + k]! * scale[i]! * scale[k]!
      for (let p = 0; p < k; p++) sum -= l[i * n + p]! * l[k * n + p]!
      if (i === k && !(sum > 0)) return null
      l[i * n + k] = i === k ? Math.sqrt(sum) : sum / l[k * n + k]!
    }
  }
  const x = Float64Array.from(gap, (g, k) => g * scale[k]!)
  for (let i = 0; i < n; i++) {
    for (let p = 0; p < i; p++) x[i]! -= l[i * n + p]! * x[p]!
    x[i]! /= l[i * n + i]!
  }
  for (let i = n - 1; i >= 0; i--) {
    for (let p = i + 1; p < n; p++) x[i]! -= l[p * n + i]! * x[p]!
    x[i]! /= l[i * n + i]!
  }
  return x.map((value, k) => value * scale[k]!)
}

/**
 * Longest step along the Newton direction that lowers F. Far below the solution the Newton step of an exponential is far too
 * long (true step ln(1 + s) for a computed step s), so it is shortened to that first.
 */
function lineSearch(system: CompiledSystem, state: State, step: Step): State | null {
  const longest = step.du.reduce((top, x) => Math.max(top, Math.abs(x)), 0)
  if (!Number.isFinite(longest)) return null
  let length = longest > 1 ? (1 + Math.log(longest)) / longest : 1
  let scale = Math.abs(state.objective)
  for (const c of state.c) scale += c
  for (let attempt = 0; attempt < 60; attempt++) {
    const next = stateAt(system, state.u.map((x, k) => x + length * step.du[k]!))
    if (next.objective <= state.objective + 1e-4 * length * step.slope + 4e-15 * scale) return next
    length /= 2
  }
  return null
}

function balanceError(system: CompiledSystem, c: Float64Array): number {
  const m = c.length
  let worst = 0
  for (let k = 0; k < system.unknowns.length; k++) {
    let sum = 0
    let size = Math.abs(system.totals_M[k]!)
    for (let j = 0; j < m; j++) {
      const term = system.powers[k * m + j]! * c[j]!
      sum += term
      size += Math.abs(term)
    }
    worst = Math.max(worst, size === 0 ? 0 : Math.abs(system.totals_M[k]! - sum) / size)
  }
  return worst
}

function speciation(system: CompiledSystem, state: State, iterations: number): Speciation {
  const species_M: Record<string, number> = {}
  const free_M: Record<string, number> = {}
  for (const name of system.absent) species_M[name] = 0
  system.names.forEach((name, j) => { species_M[name] = state.c[j]! })
  system.unknowns.forEach((name, k) => { free_M[name] = state.c[k]! })
  for (const component of system.held) free_M[component.name] = 10 ** component.logFree
  return { ok: true, free_M, species_M, iterations, balanceError: balanceError(system, state.c), lnFree: state.u }
}

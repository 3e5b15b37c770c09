/**
 * The speciation solver for many neighbouring points (a pH sweep, a titration): laid out once, no allocation per step, each point started from the
 * one before. Same equations, basis and tolerance as solve.ts, which is asked where a point does not come out.
 */
import { factorScaled, solveScaled } from './cholesky'
import type { Kernel, Work } from './kernelLayout'
import { pivotBasis, type PivotBasis } from './pivot'
import { BALANCE_TOLERANCE, solveSystem, type SpeciationRefused } from './solve'

const STEP_LIMIT = 60
/** A change of ln(free) from which on the order of abundance may have changed. */
const FAR = 0.3
/** Lowest rise that a line search cannot tell from rounding, in units of Σ c + |F|. */
const ROUNDING = 4e-15

/**
 * Solves at the totals and ln β now in the kernel, from ln(free) in `u`; the solution replaces `u` and `c`.
 * @returns null when solved, otherwise why not
 */
export function solvePoint(kernel: Kernel): SpeciationRefused | null {
  const { work } = kernel
  let objective = concentrationsAt(kernel, kernel.u, kernel.c)
  kernel.steps = 0
  let isFar = true
  for (let turn = 0; turn <= STEP_LIMIT && Number.isFinite(objective); turn++) {
    // a short step leaves the order of abundance as it was: the basis is looked at again only after a long one
    const fresh = isFar && chooseBasis(kernel)
    const rowError = measureGap(kernel)
    if (rowError <= BALANCE_TOLERANCE / 4 && worstBalance(kernel) <= BALANCE_TOLERANCE) return null
    if (!newton(kernel, work.basis!)) {
      if (fresh) break
      work.basis = null
      isFar = true
      continue
    }
    const next = search(kernel, objective)
    if (Number.isNaN(next)) break
    isFar = work.longest > FAR
    objective = next
    kernel.steps++
  }
  return solveAfresh(kernel)
}

/** Keeps the basis while it serves; true when it was chosen anew. Its totals are those of the moment. */
export function chooseBasis(kernel: Kernel): boolean {
  const { work, n, m, c, totals_M } = kernel
  let fresh = false
  if (work.basis === null || !serves(work, work.basis, c)) {
    work.basis = pivotBasis(kernel.system.powers, totals_M, Array.from(c.keys()).sort((a, b) => c[b]! - c[a]!))
    packBasis(work, work.basis, m)
    fresh = true
  }
  // the first n species are the bare components, so their columns of the rows are the transformation itself
  const { rows } = work.basis
  for (let k = 0; k < n; k++) {
    let sum = 0
    for (let i = 0; i < n; i++) sum += rows[k * m + i]! * totals_M[i]!
    work.totals[k] = sum
  }
  return fresh
}

/** As basisServes of pivot.ts, on the packed entries. */
function serves({ basisFirst, basisIndex }: Work, { pivots }: PivotBasis, c: Float64Array): boolean {
  for (let j = 0; j < c.length; j++) {
    for (let at = basisFirst[j]!; at < basisFirst[j + 1]!; at++) if (c[j]! > 10 * c[pivots[basisIndex[at]!]!]!) return false
  }
  return true
}

function packBasis({ basisFirst, basisIndex, basisValue }: Work, { rows, pivots }: PivotBasis, m: number): void {
  let at = 0
  for (let j = 0; j < m; j++) {
    for (let k = 0; k < pivots.length; k++) {
      if (Math.abs(rows[k * m + j]!) <= 1e-9) continue
      basisIndex[at] = k
      basisValue[at++] = rows[k * m + j]!
    }
    basisFirst[j + 1] = at
  }
}

/** Gap of every balance in the pivot basis; returns the largest relative error of a row. */
function measureGap({ n, m, c, work }: Kernel): number {
  const { totals, gap, size, basisFirst, basisIndex, basisValue } = work
  for (let k = 0; k < n; k++) {
    gap[k] = totals[k]!
    size[k] = Math.abs(totals[k]!)
  }
  for (let j = 0; j < m; j++) {
    for (let at = basisFirst[j]!; at < basisFirst[j + 1]!; at++) {
      const term = basisValue[at]! * c[j]!
      gap[basisIndex[at]!]! -= term
      size[basisIndex[at]!]! += term < 0 ? -term : term
    }
  }
  let rowError = 0
  for (let k = 0; k < n; k++) if (size[k]! > 0) rowError = Math.max(rowError, Math.abs(gap[k]!) / size[k]!)
  return rowError
}

/** Lower triangle of the Hessian in the pivot basis. */
export function assembleHessian({ n, m, c, work }: Kernel): void {
  const { hessian, basisFirst, basisIndex, basisValue } = work
  hessian.fill(0)
  for (let j = 0; j < m; j++) {
    const from = basisFirst[j]!
    const to = basisFirst[j + 1]!
    for (let a = from; a < to; a++) {
      const term = basisValue[a]! * c[j]!
      const row = basisIndex[a]! * n
      for (let b = from; b <= a; b++) hessian[row + basisIndex[b]!]! += term * basisValue[b]!
    }
  }
}

function newton(kernel: Kernel, { rows }: PivotBasis): boolean {
  const { n, m, work } = kernel
  assembleHessian(kernel)
  if (!factorScaled(work.hessian, work.scale, n)) return false
  work.dv.set(work.gap)
  solveScaled(work.hessian, work.scale, work.dv, n)
  work.du.fill(0)
  for (let k = 0; k < n; k++) for (let i = 0; i < n; i++) work.du[i]! += rows[k * m + i]! * work.dv[k]!
  return true
}

/** Damped step as in solve.ts; the objective at the new point, NaN where none is lower. */
function search(kernel: Kernel, objective: number): number {
  const { n, u, c, work } = kernel
  let longest = 0
  let slope = 0
  let sum = Math.abs(objective)
  for (let k = 0; k < n; k++) {
    longest = Math.max(longest, Math.abs(work.du[k]!))
    slope -= work.gap[k]! * work.dv[k]!
  }
  work.longest = longest
  if (!(longest < Infinity)) return NaN
  for (let j = 0; j < kernel.m; j++) sum += c[j]!
  let length = longest > 1 ? (1 + Math.log(longest)) / longest : 1
  for (let attempt = 0; attempt < 60; attempt++) {
    for (let k = 0; k < n; k++) work.trial[k] = u[k]! + length * work.du[k]!
    const next = concentrationsAt(kernel, work.trial, work.trialC)
    if (next <= objective + 1e-4 * length * slope + ROUNDING * sum) {
      u.set(work.trial)
      c.set(work.trialC)
      return next
    }
    length /= 2
  }
  return NaN
}

/** Fills c at ln(free) = u and returns the convex function whose gradient are the balances. */
export function concentrationsAt({ n, m, lnBeta, totals_M, work: { first, index, value } }: Kernel, u: Float64Array, c: Float64Array): number {
  let objective = 0
  for (let j = 0; j < m; j++) {
    let exponent = lnBeta[j]!
    for (let at = first[j]!; at < first[j + 1]!; at++) exponent += value[at]! * u[index[at]!]!
    c[j] = Math.exp(exponent)
    objective += c[j]!
  }
  for (let k = 0; k < n; k++) objective -= totals_M[k]! * u[k]!
  return objective
}

function worstBalance(kernel: Kernel): number {
  const { n, m, c, totals_M, work: { first, index, value, trial, size } } = kernel
  for (let k = 0; k < n; k++) {
    trial[k] = totals_M[k]!
    size[k] = Math.abs(totals_M[k]!)
  }
  for (let j = 0; j < m; j++) {
    for (let at = first[j]!; at < first[j + 1]!; at++) {
      const term = value[at]! * c[j]!
      trial[index[at]!]! -= term
      size[index[at]!]! += term < 0 ? -term : term
    }
  }
  let worst = 0
  for (let k = 0; k < n; k++) if (size[k]! > 0) worst = Math.max(worst, Math.abs(trial[k]!) / size[k]!)
  kernel.balanceError = worst
  return worst
}

/** The slow, sure way: without a start from a neighbour. */
function solveAfresh(kernel: Kernel): SpeciationRefused | null {
  const answer = solveSystem({ ...kernel.system, lnBeta: kernel.lnBeta.slice(), totals_M: kernel.totals_M.slice() })
  if (!answer.ok) return answer
  kernel.u.set(answer.lnFree)
  concentrationsAt(kernel, kernel.u, kernel.c)
  kernel.steps += answer.iterations
  kernel.balanceError = answer.balanceError
  kernel.work.basis = null
  return null
}

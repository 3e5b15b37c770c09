/**
 * How one free concentration answers to every constant and total at a solved point: the mass balances differentiated implicitly, by one solve with
 * the transposed system, so the cost does not grow with the number of constants.
 */
import { factorScaled, solveScaled } from './cholesky'
import { assembleHessian, chooseBasis } from './kernel'
import type { Kernel } from './kernelLayout'

export interface Sensitivity {
  /** ∂ ln(free) / ∂ ln β of every species, in the order of the kernel. */
  readonly perLnBeta: Float64Array
  /** ∂ ln(free) / ∂ total of every unknown, L/mol. */
  readonly perTotal: Float64Array
}

export function openSensitivity(kernel: Kernel): Sensitivity {
  return { perLnBeta: new Float64Array(kernel.m), perTotal: new Float64Array(kernel.n) }
}

/** Fills `into` for unknown number `q` at the point the kernel was last solved at; false where the balances are singular. */
export function differentiate(kernel: Kernel, q: number, into: Sensitivity): boolean {
  const { n, m, c, work } = kernel
  chooseBasis(kernel)
  const rows = work.basis?.rows
  if (!rows) return false
  assembleHessian(kernel)
  if (!factorScaled(work.hessian, work.scale, n)) return false
  for (let k = 0; k < n; k++) work.dv[k] = rows[k * m + q]!
  solveScaled(work.hessian, work.scale, work.dv, n)
  into.perLnBeta.fill(0)
  for (let j = 0; j < m; j++) {
    let sum = 0
    for (let at = work.basisFirst[j]!; at < work.basisFirst[j + 1]!; at++) sum += work.dv[work.basisIndex[at]!]! * work.basisValue[at]!
    // the first n species are the components themselves: their column carries a change of the total
    if (j < n) into.perTotal[j] = sum
    into.perLnBeta[j] = -c[j]! * sum
  }
  return true
}

/** The curve that a set of constants predicts, with its derivatives. */
import { solvePoint } from '../equilibria/kernel'
import { openKernel, type Kernel } from '../equilibria/kernelLayout'
import { differentiate, openSensitivity, type Sensitivity } from '../equilibria/sensitivity'
import { compileSystem, type Species } from '../equilibria/system'
import type { CurvePoints } from './curves'

export interface CurveSolver {
  readonly points: CurvePoints
  readonly kernel: Kernel
  /** Position of H among the unknowns. */
  readonly proton: number
  /** Position of every refined species in the kernel; −1 where this curve holds none of it. */
  readonly refined: readonly number[]
  /** ln(free) at every point as last solved: the start of the next evaluation. */
  readonly warm: (Float64Array | null)[]
  readonly sensitivity: Sensitivity
}

export interface SolverRefused { readonly ok: false, readonly message: string }

export function openCurve(points: CurvePoints, species: readonly Species[], refined: readonly string[]): CurveSolver | SolverRefused {
  const usable = species.filter(one => Object.entries(one.stoichiometry).every(([name, power]) => power === 0 || points.components.includes(name)))
  const first = points.totals_M[0]!
  const compiled = compileSystem({ components: points.components.map((name, k) => ({ name, total_M: first[k]! })), species: usable })
  if (!compiled.ok) return { ok: false, message: compiled.message }
  const kernel = openKernel(compiled)
  return {
    points, kernel, proton: compiled.unknowns.indexOf('H'), refined: refined.map(name => compiled.names.indexOf(name)),
    warm: points.totals_M.map(() => null), sensitivity: openSensitivity(kernel),
  }
}

export interface PointAnswer {
  pcH: number
  /** ∂pcH/∂V, per mL. */
  perMl: number
}

/**
 * Solves point i with ln β now in the kernel and `acid_mmol` more acid in the vessel; the derivatives stand in `sensitivity` afterwards.
 * NaN where the balances cannot be met.
 */
export function solveAt(solver: CurveSolver, i: number, acid_mmol: number): PointAnswer {
  const { kernel, points, proton, warm, sensitivity } = solver
  kernel.totals_M.set(points.totals_M[i]!)
  if (points.acidFactor) kernel.totals_M[proton]! += acid_mmol * points.acidFactor[i]!
  const start = warm[i] ?? (i > 0 ? warm[i - 1] : null)
  if (start) kernel.u.set(start)
  else for (let k = 0; k < kernel.n; k++) kernel.u[k] = k === proton ? -points.pcH[i]! * Math.LN10 : Math.log(Math.abs(kernel.totals_M[k]!)) - 20
  if (solvePoint(kernel) !== null || !differentiate(kernel, proton, sensitivity)) return { pcH: NaN, perMl: NaN }
  if (warm[i]) warm[i].set(kernel.u)
  else warm[i] = kernel.u.slice()
  let slope = 0
  for (let k = 0; k < kernel.n; k++) slope += sensitivity.perTotal[k]! * points.perMl_M[i]![k]!
  return { pcH: -kernel.u[proton]! / Math.LN10, perMl: -slope / Math.LN10 }
}

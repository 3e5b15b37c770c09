/**
 * Refinement of chosen log β over one or several titration curves by weighted least squares: residuals in pH, weights from the error of a
 * reading and of a volume together, so that the end point, where a hair of volume is a pH unit, does not decide everything.
 */
import type { Species } from '../equilibria/system'
import { correlationOf, informationOf, studentise } from '../least-squares/covariance'
import { studentFactor } from '../least-squares/line'
import { LARGEST_CONDITION } from '../least-squares/reportFit'
import type { LeastSquaresProblem, Solution } from '../least-squares/problem'
import { solve } from '../least-squares/trustRegion'
import { layOut, type CurveRefused, type TitrationCurve } from './curves'
import { openCurve, solveAt, type CurveSolver } from './forward'

export interface TitrationSystem {
  /** Every component, H among them. */
  readonly components: readonly string[]
  /** Every species with its log β: fixed, or the start where it is refined. */
  readonly species: readonly Species[]
  /** Names of the species whose log β is refined. */
  readonly refine: readonly string[]
}

export interface RefinedConstant {
  readonly name: string
  readonly logBeta: number
  /** Null where it cannot be estimated. */
  readonly se: number | null
  readonly interval: readonly [number, number] | null
}

export interface CurveFit {
  readonly label: string
  readonly fitted_pcH: readonly number[]
  /** Measured minus fitted. */
  readonly residuals_pcH: readonly number[]
  /** Standard deviation each point was given: reading and volume together. */
  readonly sigma_pcH: readonly number[]
  readonly studentised: readonly (number | null)[]
  /** Acid added to the stated amount by the fit, with its error; null where it was held. */
  readonly acid_mmol: number | null
  readonly acidSe_mmol: number | null
}

export interface Refinement {
  readonly ok: true
  readonly constants: readonly RefinedConstant[]
  /** Over the constants; null where no errors exist. */
  readonly covariance: readonly (readonly number[])[] | null
  readonly correlation: readonly (readonly number[])[] | null
  readonly curves: readonly CurveFit[]
  readonly chi2: number
  readonly dof: number
  readonly reducedChi2: number | null
  readonly condition: number | null
  readonly converged: boolean
  readonly evaluations: number
}

export interface RefinementRefused {
  readonly ok: false
  readonly reason: CurveRefused['reason'] | 'badSystem' | 'tooFewPoints' | 'cannotSolve'
  readonly message: string
  readonly accepted: string
}

/** How far from its start a log β may go. */
export const REACH = 12
const PASSES = 12
/** While the weights still move there is no use in the last digits. */
const ROUGH = { reductionTolerance: 1e-4, stepTolerance: 1e-4, polishSteps: 0 } as const

/** What a refinement works on; kept apart so that profiles can hold constants without laying the curves out anew. */
export interface Bench {
  readonly system: TitrationSystem
  readonly solvers: readonly CurveSolver[]
  readonly count: number
  /** Curves whose acid is refined, by index. */
  readonly acids: readonly number[]
}

/** Refines, or says what is wrong with the system or the curves. */
export function refineConstants(system: TitrationSystem, curves: readonly TitrationCurve[]): Refinement | RefinementRefused {
  const bench = openBench(system, curves)
  if ('ok' in bench) return bench
  const found = minimise(bench, startOf(bench), new Map())
  if (found === null) return { ok: false, reason: 'cannotSolve', message: 'At the starting constants the balances of some point cannot be met.', accepted: 'Amounts that agree with the curve, and starting constants within a few units.' }
  return report(bench, found)
}

export function openBench(system: TitrationSystem, curves: readonly TitrationCurve[]): Bench | RefinementRefused {
  const bad = (message: string, accepted: string): RefinementRefused => ({ ok: false, reason: 'badSystem', message, accepted })
  if (!system.components.includes('H')) return bad('H is no component.', 'A component H: the readings are its free concentration.')
  if (!system.species.some(one => one.stoichiometry.H === -1 && Object.keys(one.stoichiometry).length === 1)) return bad('The self-ionisation of water is missing.', 'A species OH, H to the power −1, with log β = −pKw of the medium.')
  const unknown = system.refine.find(name => !system.species.some(one => one.name === name))
  if (unknown !== undefined) return bad(`${unknown} is to be refined but is no species.`, 'Names of species of the system.')
  if (system.refine.length === 0 || new Set(system.refine).size < system.refine.length) return bad('No constant, or one twice, is named to be refined.', 'Each constant to be refined, once.')
  const solvers: CurveSolver[] = []
  for (const curve of curves) {
    const points = layOut(curve, system.components)
    if ('ok' in points) return points
    if (points.pcH.length === 0) return { ok: false, reason: 'tooFewPoints', message: `${curve.label} holds no point.`, accepted: 'Curves with points.' }
    const solver = openCurve(points, system.species, system.refine)
    if ('ok' in solver) return bad(solver.message, 'Species made of listed components with a finite log β.')
    solvers.push(solver)
  }
  const nowhere = system.refine.findIndex((_, r) => solvers.every(one => one.refined[r]! < 0))
  if (nowhere >= 0 && solvers.length > 0) return bad(`No curve holds what ${system.refine[nowhere]} is made of.`, 'A curve with all its components.')
  const acids = solvers.flatMap((one, i) => one.points.acidFactor ? [i] : [])
  const count = solvers.reduce((sum, one) => sum + one.points.pcH.length, 0)
  const needed = system.refine.length + acids.length + 1
  return count >= needed ? { system, solvers, count, acids } : { ok: false, reason: 'tooFewPoints', message: `${count} points for ${needed - 1} unknowns.`, accepted: `At least ${needed} points.` }
}

export function startOf({ system, acids }: Bench): Float64Array {
  return Float64Array.from([...system.refine.map(name => system.species.find(one => one.name === name)!.logBeta), ...acids.map(() => 0)])
}

export interface Minimum { readonly full: Float64Array, readonly solution: Solution, readonly sigma: Float64Array, readonly fitted: Float64Array }

/** Least squares with the constants in `held` (index → value) fixed; weights are brought up to date until they stand. Null where it cannot start. */
export function minimise(bench: Bench, start: Float64Array, held: ReadonlyMap<number, number>): Minimum | null {
  const size = start.length
  const free = Array.from({ length: size }, (_, j) => j).filter(j => !held.has(j))
  const full = start.slice()
  for (const [j, value] of held) full[j] = value
  const fitted = new Float64Array(bench.count)
  const jacobian = new Float64Array(bench.count * size)
  const sigma = new Float64Array(bench.count)
  const fresh = new Float64Array(bench.count)
  if (!sweep(bench, full, { fitted, jacobian, sigma })) return null
  let solution: Solution | null = null
  const origin = startOf(bench)
  let isRough = true
  for (let pass = 0; pass < PASSES; pass++) {
    solution = solve(problemOf(bench, { full, free, sigma, origin }), free.map(j => full[j]!), isRough ? ROUGH : {})
    free.forEach((j, c) => { full[j] = solution!.parameters[c]! })
    if (!sweep(bench, full, { fitted, jacobian, sigma: fresh })) return null
    const moved = fresh.reduce((top, s, i) => Math.max(top, Math.abs(s / sigma[i]! - 1)), 0)
    sigma.set(fresh)
    if (moved < 1e-7 && !isRough) break
    isRough = moved > 1e-3
  }
  return solution && { full, solution, sigma, fitted }
}

interface Frame { readonly full: Float64Array, readonly free: readonly number[], readonly sigma: Float64Array, readonly origin: Float64Array }

function problemOf(bench: Bench, { full, free, sigma, origin }: Frame): LeastSquaresProblem {
  const n = bench.count
  const all = full.slice()
  const fitted = new Float64Array(n)
  const whole = new Float64Array(n * full.length)
  const unused = new Float64Array(n)
  return {
    n, m: free.length, lower: Float64Array.from(free, j => origin[j]! - REACH), upper: Float64Array.from(free, j => origin[j]! + REACH),
    evaluate: (p, residual, jacobian) => {
      free.forEach((j, c) => { all[j] = p[c]! })
      if (!sweep(bench, all, { fitted, jacobian: whole, sigma: unused })) {
        residual.fill(NaN)
        return
      }
      let at = 0
      for (const { points } of bench.solvers) for (let i = 0; i < points.pcH.length; i++, at++) residual[at] = (fitted[at]! - points.pcH[i]!) / sigma[at]!
      free.forEach((j, c) => { for (let i = 0; i < n; i++) jacobian[c * n + i] = whole[j * n + i]! / sigma[i]! })
    },
  }
}

interface Into { readonly fitted: Float64Array, readonly jacobian: Float64Array, readonly sigma: Float64Array }

/** Every point of every curve at one set of parameters; false where a point cannot be solved. */
function sweep({ solvers, acids, count, system }: Bench, full: Float64Array, into: Into): boolean {
  let at = 0
  into.jacobian.fill(0)
  for (const [s, solver] of solvers.entries()) {
    const { kernel, points, refined, sensitivity, proton } = solver
    refined.forEach((j, r) => { if (j >= 0) kernel.lnBeta[j] = full[r]! * Math.LN10 })
    const acid = acids.indexOf(s)
    const acidAt = system.refine.length + acid
    for (let i = 0; i < points.pcH.length; i++, at++) {
      const { pcH, perMl } = solveAt(solver, i, acid < 0 ? 0 : full[acidAt]!)
      if (!Number.isFinite(pcH)) return false
      into.fitted[at] = pcH
      into.sigma[at] = Math.hypot(points.sigma_pcH, perMl * points.sigma_mL)
      // pcH = −ln h / ln10 and ln β = ln10 · log β: the two factors cancel
      refined.forEach((j, r) => { if (j >= 0) into.jacobian[r * count + at] = -sensitivity.perLnBeta[j]! })
      if (acid >= 0) into.jacobian[acidAt * count + at] = -sensitivity.perTotal[proton]! * points.acidFactor![i]! / Math.LN10
    }
  }
  return true
}

function report(bench: Bench, { full, solution, sigma, fitted }: Minimum): Refinement {
  const n = bench.count
  const m = full.length
  const dof = n - m
  const reducedChi2 = dof > 0 ? solution.sumOfSquares / dof : null
  const info = informationOf(solution.jacobian, n, solution.atBound)
  const isRegular = solution.converged && info.inverse !== null && info.condition !== null && info.condition < LARGEST_CONDITION
  const factor = Math.max(1, reducedChi2 ?? 1)
  const variance = (a: number, b: number) => factor * info.inverse![a * m + b]!
  const se = (j: number) => isRegular && !solution.atBound[j] ? Math.sqrt(variance(j, j)) : null
  const half = studentFactor(0.95, factor > 1 ? dof : null)
  const constants = bench.system.refine.map((name, r): RefinedConstant => {
    const error = se(r)
    return { name, logBeta: full[r]!, se: error, interval: error === null ? null : [full[r]! - half * error, full[r]! + half * error] }
  })
  const covariance = isRegular ? constants.map((_, a) => constants.map((__, b) => variance(a, b))) : null
  const studentised = studentise(solution.residual.map(r => -r), info.leverage ?? new Float64Array(n), dof)
  return {
    ok: true, constants, covariance, correlation: covariance && correlationOf(covariance), chi2: solution.sumOfSquares, dof, reducedChi2, condition: info.condition,
    converged: solution.converged, evaluations: solution.evaluations, curves: curvesOf(bench, { full, fitted, sigma, studentised, se }),
  }
}

interface Told { full: Float64Array, fitted: Float64Array, sigma: Float64Array, studentised: readonly (number | null)[], se: (j: number) => number | null }

function curvesOf({ solvers, acids, system }: Bench, told: Told): CurveFit[] {
  let from = 0
  return solvers.map(({ points }, s) => {
    const to = from + points.pcH.length
    const fitted_pcH = Array.from(told.fitted.subarray(from, to))
    const acid = acids.indexOf(s) < 0 ? null : system.refine.length + acids.indexOf(s)
    const fit: CurveFit = {
      label: points.label, fitted_pcH, residuals_pcH: fitted_pcH.map((value, i) => points.pcH[i]! - value), sigma_pcH: Array.from(told.sigma.subarray(from, to)),
      studentised: told.studentised.slice(from, to), acid_mmol: acid === null ? null : told.full[acid]!, acidSe_mmol: acid === null ? null : told.se(acid),
    }
    from = to
    return fit
  })
}

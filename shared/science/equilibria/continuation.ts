/**
 * Speciation along a path: against pH, or against the total of one component. One layout for all points; each starts from the points before it,
 * extrapolated. Precipitation is not modelled: solids that would form are not looked for (see {@link NO_SOLIDS}).
 */
import { solvePoint } from './kernel'
import { openKernel, type Kernel } from './kernelLayout'
import { solveSystem, type SpeciationRefused } from './solve'
import { compileSystem, type Component, type Species } from './system'

/** Points that the start of the next one is extrapolated from: more gain nothing on grids of 0.05 pH. */
const MOST_PAST = 6

/** Printed beside every distribution. */
export const NO_SOLIDS = 'Precipitation is not modelled: where a hydroxide, carbonate or phosphate would form, the curves beyond that point are not to be believed.'

export interface PathInput {
  /** Every component but the one that is varied. */
  readonly components: readonly Component[]
  readonly species: readonly Species[]
}

/** What is varied: pH as −log10 [H⁺], or the total of a component, mol/L. */
export type PathVariable = { readonly kind: 'pcH', readonly values: readonly number[] } | { readonly kind: 'total', readonly component: string, readonly values: readonly number[] }

export interface PathDone {
  readonly ok: true
  readonly values: readonly number[]
  /** mol/L at every point; free components included. */
  readonly species_M: Readonly<Record<string, readonly number[]>>
  /** Newton steps at every point. */
  readonly steps: readonly number[]
  /** Largest relative balance error of the whole path. */
  readonly balanceError: number
}

export interface PathRefused {
  readonly ok: false
  readonly reason: 'badPath' | 'badSystem' | SpeciationRefused['reason']
  readonly message: string
  readonly accepted: string
}

/** Speciation at every value; refused as a whole where one point cannot be solved, with that point named. */
export function followPath(input: PathInput, variable: PathVariable): PathDone | PathRefused {
  const problem = pathProblem(variable)
  if (problem) return problem
  const held: Component = variable.kind === 'pcH' ? { name: 'H', logFree: 0 } : { name: variable.component, total_M: variable.values[0]! }
  const compiled = compileSystem({ components: [...input.components, held], species: input.species })
  if (!compiled.ok) return { ok: false, reason: 'badSystem', message: compiled.message, accepted: 'Components with names of their own and totals of 0 or more; species made of listed components with a finite log β.' }
  const kernel = openKernel(compiled)
  const set = variable.kind === 'pcH' ? protonSetter(kernel, input.species) : totalSetter(kernel, variable.component)
  return walk(kernel, variable.values, set)
}

function pathProblem(variable: PathVariable): PathRefused | null {
  const refuse = (message: string, accepted: string): PathRefused => ({ ok: false, reason: 'badPath', message, accepted })
  if (variable.values.length === 0) return refuse('No point is asked for.', 'At least one value.')
  const [low, high] = variable.kind === 'pcH' ? [0, 14] : [Number.MIN_VALUE, Infinity]
  const bad = variable.values.findIndex(value => !(value >= low && value <= high && value < Infinity))
  if (bad < 0) return null
  const what = variable.kind === 'pcH' ? 'pH' : `the total of ${variable.component}`
  return refuse(`Point ${bad + 1}: ${what} is ${variable.values[bad]}.`, variable.kind === 'pcH' ? 'pH from 0 to 14.' : 'Totals above 0 mol/L.')
}

type Setter = (value: number) => void

/** Folds −pH into ln β of the species that hold protons. */
function protonSetter(kernel: Kernel, species: readonly Species[]): Setter {
  const byName = new Map(species.map(one => [one.name, one.stoichiometry.H ?? 0]))
  const protons = kernel.system.names.map(name => byName.get(name) ?? 0)
  return (pcH) => {
    for (let j = 0; j < protons.length; j++) kernel.lnBeta[j] = kernel.system.lnBeta[j]! - protons[j]! * pcH * Math.LN10
  }
}

function totalSetter(kernel: Kernel, component: string): Setter {
  const at = kernel.system.unknowns.indexOf(component)
  return (total_M) => {
    kernel.totals_M[at] = total_M
  }
}

function walk(kernel: Kernel, values: readonly number[], set: Setter): PathDone | PathRefused {
  const { m, system } = kernel
  const all = new Float64Array(m * values.length)
  const steps: number[] = []
  const past: Float64Array[] = []
  let balanceError = 0
  for (let i = 0; i < values.length; i++) {
    set(values[i]!)
    if (i > 0) extrapolate(kernel.u, past, values, i)
    const problem = i === 0 ? firstPoint(kernel) : solvePoint(kernel)
    if (problem) return { ...problem, message: `At point ${i + 1} (${values[i]}): ${problem.message}.`, accepted: 'Totals that positive concentrations can meet.' }
    const kept = past.length === MOST_PAST ? past.shift()! : new Float64Array(kernel.n)
    kept.set(kernel.u)
    past.push(kept)
    all.set(kernel.c, i * m)
    steps.push(kernel.steps)
    if (kernel.balanceError > balanceError) balanceError = kernel.balanceError
  }
  const species_M: Record<string, number[]> = {}
  system.names.forEach((name, j) => { species_M[name] = columnOf(all, j, m) })
  for (const name of system.absent) species_M[name] = values.map(() => 0)
  return { ok: true, values, species_M, steps, balanceError }
}

function columnOf(all: Float64Array, j: number, m: number): number[] {
  const column: number[] = []
  for (let at = j; at < all.length; at += m) column.push(all[at]!)
  return column
}

function firstPoint(kernel: Kernel): SpeciationRefused | null {
  const answer = solveSystem({ ...kernel.system, lnBeta: kernel.lnBeta.slice(), totals_M: kernel.totals_M.slice() })
  if (!answer.ok) return answer
  kernel.u.set(answer.lnFree)
  const problem = solvePoint(kernel)
  kernel.steps += answer.iterations
  return problem
}

/** ln(free) at the next value by the polynomial through the points before it (Lagrange). Repeated values leave the last solution as the start. */
function extrapolate(u: Float64Array, past: readonly Float64Array[], values: readonly number[], i: number): void {
  const count = past.length
  const from = i - count
  for (let a = from + 1; a < i; a++) if (!((values[a]! - values[a - 1]!) * (values[i]! - values[i - 1]!) > 0)) return
  u.fill(0)
  for (let a = 0; a < count; a++) {
    let weight = 1
    for (let b = 0; b < count; b++) if (b !== a) weight *= (values[i]! - values[from + b]!) / (values[from + a]! - values[from + b]!)
    const known = past[a]!
    for (let k = 0; k < u.length; k++) u[k]! += weight * known[k]!
  }
}

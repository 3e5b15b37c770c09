/**
 * A system of components and species at equilibrium: any number of metals, ligands and protons.
 * A species is a product of powers of the components: c = β · Π free_i^a_i. Powers may be negative
 * (M(OH) is M·H⁻¹). A component is given by its total, or its free concentration is held (a pH).
 */

export interface TotalComponent {
  readonly name: string
  readonly total_M: number
}

export interface HeldComponent {
  readonly name: string
  /** log10 of the free concentration, mol/L; −pH for protons. */
  readonly logFree: number
}

export type Component = TotalComponent | HeldComponent

export interface Species {
  readonly name: string
  readonly stoichiometry: Readonly<Record<string, number>>
  readonly logBeta: number
}

export interface EquilibriumSystem {
  readonly components: readonly Component[]
  readonly species: readonly Species[]
}

export type SystemRefusal = 'duplicateName' | 'unknownComponent' | 'notFinite' | 'negativeTotal' | 'emptySpecies'

export interface CompiledSystem {
  readonly ok: true
  /** Components whose free concentration is sought, absent ones (total 0) left out. */
  readonly unknowns: readonly string[]
  readonly totals_M: Float64Array
  /** Species that can exist, the free unknowns first, in the same order as `unknowns`. */
  readonly names: readonly string[]
  /** Power of unknown k in species j, at [k * names.length + j]. */
  readonly powers: Float64Array
  /** ln β with the held components folded in. */
  readonly lnBeta: Float64Array
  readonly held: readonly HeldComponent[]
  /** Components and species that cannot exist because a total is zero. */
  readonly absent: readonly string[]
}

export interface SystemRefused {
  readonly ok: false
  readonly reason: SystemRefusal
  readonly message: string
}

const isHeld = (component: Component): component is HeldComponent => 'logFree' in component

function problemOf(system: EquilibriumSystem): SystemRefused | null {
  const refuse = (reason: SystemRefusal, message: string): SystemRefused => ({ ok: false, reason, message })
  const names = new Set<string>()
  for (const component of system.components) {
    if (names.has(component.name)) return refuse('duplicateName', `${component.name} is listed twice`)
    names.add(component.name)
    const value = isHeld(component) ? component.logFree : component.total_M
    if (!Number.isFinite(value)) return refuse('notFinite', `the amount of ${component.name} is not a number`)
    const canBeNegative = system.species.some(species => (species.stoichiometry[component.name] ?? 0) < 0)
    if (!isHeld(component) && value < 0 && !canBeNegative) return refuse('negativeTotal', `the total of ${component.name} is negative`)
  }
  for (const species of system.species) {
    if (names.has(species.name)) return refuse('duplicateName', `${species.name} is listed twice`)
    names.add(species.name)
    const powers = Object.entries(species.stoichiometry)
    if (powers.every(([, power]) => power === 0)) return refuse('emptySpecies', `${species.name} is made of nothing`)
    for (const [component, power] of powers) {
      if (!system.components.some(other => other.name === component)) return refuse('unknownComponent', `${species.name} contains ${component}, which is no component`)
      if (!Number.isFinite(power)) return refuse('notFinite', `a power in ${species.name} is not a number`)
    }
    if (!Number.isFinite(species.logBeta)) return refuse('notFinite', `log β of ${species.name} is not a number`)
  }
  return null
}

/** Checks a system and lays it out for the solver, or says what is wrong with it. */
export function compileSystem(system: EquilibriumSystem): CompiledSystem | SystemRefused {
  const problem = problemOf(system)
  if (problem) return problem
  const held = system.components.filter(isHeld)
  const signed = new Set(system.species.flatMap(s => Object.entries(s.stoichiometry).filter(([, p]) => p < 0).map(([name]) => name)))
  const totals = system.components.filter((c): c is TotalComponent => !isHeld(c))
  const absentNames = new Set(totals.filter(c => c.total_M === 0 && !signed.has(c.name)).map(c => c.name))
  const present = totals.filter(c => !absentNames.has(c.name))
  const possible = system.species.filter(s => !Object.entries(s.stoichiometry).some(([name, power]) => power !== 0 && absentNames.has(name)))
  const n = present.length
  const m = n + possible.length
  const powers = new Float64Array(n * m)
  const lnBeta = new Float64Array(m)
  for (let k = 0; k < n; k++) powers[k * m + k] = 1
  for (const [index, species] of possible.entries()) {
    const j = n + index
    let logBeta = species.logBeta
    for (const component of held) logBeta += (species.stoichiometry[component.name] ?? 0) * component.logFree
    lnBeta[j] = logBeta * Math.LN10
    for (let k = 0; k < n; k++) powers[k * m + j] = species.stoichiometry[present[k]!.name] ?? 0
  }
  return {
    ok: true,
    unknowns: present.map(c => c.name),
    totals_M: Float64Array.from(present, c => c.total_M),
    names: [...present.map(c => c.name), ...possible.map(s => s.name)],
    powers, lnBeta, held,
    absent: [...absentNames, ...system.species.filter(s => !possible.includes(s)).map(s => s.name)],
  }
}

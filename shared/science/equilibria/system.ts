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

function problemOf(system: EquilibriumSystem, signed: ReadonlySet<string>): SystemRefused | null {
  const refuse = (reason: SystemRefusal, message: string): SystemRefused => ({ ok: false, reason, message })
  const components = new Set<string>()
  for (const component of system.components) {
    if (components.has(component.name)) return refuse('duplicateName', `${component.name} is listed twice`)
    components.add(component.name)
    const value = isHeld(component) ? component.logFree : component.total_M
    if (!Number.isFinite(value)) return refuse('notFinite', `the amount of ${component.name} is not a number`)
    if (!isHeld(component) && value < 0 && !signed.has(component.name)) return refuse('negativeTotal', `the total of ${component.name} is negative`)
  }
  const names = new Set(components)
  for (const species of system.species) {
    if (names.has(species.name)) return refuse('duplicateName', `${species.name} is listed twice`)
    names.add(species.name)
    let parts = 0
    for (const component in species.stoichiometry) {
      const power = species.stoichiometry[component]!
      if (power !== 0) parts++
      if (!components.has(component)) return refuse('unknownComponent', `${species.name} contains ${component}, which is no component`)
      if (!Number.isFinite(power)) return refuse('notFinite', `a power in ${species.name} is not a number`)
    }
    if (parts === 0) return refuse('emptySpecies', `${species.name} is made of nothing`)
    if (!Number.isFinite(species.logBeta)) return refuse('notFinite', `log β of ${species.name} is not a number`)
  }
  return null
}

/** Components that occur with a negative power in some species. */
function signedComponents(species: readonly Species[]): Set<string> {
  const signed = new Set<string>()
  for (const one of species) for (const name in one.stoichiometry) if (one.stoichiometry[name]! < 0) signed.add(name)
  return signed
}

/** Checks a system and lays it out for the solver, or says what is wrong with it. */
export function compileSystem(system: EquilibriumSystem): CompiledSystem | SystemRefused {
  const signed = signedComponents(system.species)
  const problem = problemOf(system, signed)
  if (problem) return problem
  const held = system.components.filter(isHeld)
  const totals = system.components.filter((c): c is TotalComponent => !isHeld(c))
  const absentNames = new Set(totals.filter(c => c.total_M === 0 && !signed.has(c.name)).map(c => c.name))
  const present = totals.filter(c => !absentNames.has(c.name))
  const isPossible = (one: Species): boolean => {
    for (const name in one.stoichiometry) if (one.stoichiometry[name] !== 0 && absentNames.has(name)) return false
    return true
  }
  const possible = absentNames.size === 0 ? system.species : system.species.filter(isPossible)
  const n = present.length
  const m = n + possible.length
  const place = new Map(present.map((component, k) => [component.name, k]))
  const powers = new Float64Array(n * m)
  const lnBeta = new Float64Array(m)
  for (let k = 0; k < n; k++) powers[k * m + k] = 1
  for (const [index, species] of possible.entries()) {
    const j = n + index
    let logBeta = species.logBeta
    for (const component of held) logBeta += (species.stoichiometry[component.name] ?? 0) * component.logFree
    lnBeta[j] = logBeta * Math.LN10
    for (const name in species.stoichiometry) {
      const k = place.get(name)
      if (k !== undefined) powers[k * m + j] = species.stoichiometry[name]!
    }
  }
  return {
    ok: true,
    unknowns: present.map(c => c.name),
    totals_M: Float64Array.from(present, c => c.total_M),
    names: [...present.map(c => c.name), ...possible.map(s => s.name)],
    powers, lnBeta, held,
    absent: [...absentNames, ...(absentNames.size === 0 ? [] : system.species.filter(one => !isPossible(one)).map(one => one.name))],
  }
}

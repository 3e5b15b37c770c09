/** Species against pH, worked out point by point with each solution as the start of the next. */
import { solveSystem, type SpeciationRefused } from './solve'
import { compileSystem, type Component, type Species, type SystemRefused } from './system'

export interface SweepInput {
  /** Every component but H, whose free concentration is swept. */
  readonly components: readonly Component[]
  readonly species: readonly Species[]
  readonly pcH: readonly number[]
}

export interface Sweep {
  readonly ok: true
  readonly pcH: readonly number[]
  /** Concentration of every species along the sweep, mol/L; free components included. */
  readonly species_M: Readonly<Record<string, readonly number[]>>
}

/** Speciation at each pH (as −log10 [H⁺]); refused as a whole where one point cannot be solved. */
export function sweepPcH(input: SweepInput): Sweep | SystemRefused | SpeciationRefused {
  const species_M: Record<string, number[]> = {}
  let start: Float64Array | undefined
  for (const pcH of input.pcH) {
    const compiled = compileSystem({ components: [...input.components, { name: 'H', logFree: -pcH }], species: input.species })
    if (!compiled.ok) return compiled
    const answer = solveSystem(compiled, start)
    if (!answer.ok) return answer
    start = answer.lnFree
    for (const [name, value] of Object.entries(answer.species_M)) (species_M[name] ??= []).push(value)
  }
  return { ok: true, pcH: input.pcH, species_M }
}

/** Share of one component held by each of its species, along a sweep; species are named with the number of that component in them. */
export function sharesOf(sweep: Sweep, members: Readonly<Record<string, number>>): Record<string, number[]> {
  const names = Object.keys(members).filter(name => sweep.species_M[name] !== undefined)
  const totals = sweep.pcH.map((_, i) => names.reduce((sum, name) => sum + members[name]! * sweep.species_M[name]![i]!, 0))
  return Object.fromEntries(names.map(name => [name, sweep.species_M[name]!.map((c, i) => members[name]! * c / totals[i]!)]))
}

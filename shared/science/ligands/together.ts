/** Which constants of many may stand in one comparison, where not all of them may. */
import { comparable, type ConstantConditions } from '../equilibria/comparable'

export interface Together {
  /** Places in the list of those that may stand together, ascending: the largest such set that starts from one of them. */
  readonly inside: readonly number[]
  /** What was taken on trust among them, in words. */
  readonly warnings: readonly string[]
  /** Those left apart, each with the reason and what would be accepted. */
  readonly outside: readonly { readonly at: number, readonly why: string }[]
}

/**
 * Sorts constants into those that may be held against each other and those that may not. A constant that states no conditions goes with any
 * (unproved, and then warned of); of sets of one size the first counts.
 */
export function comparableTogether(constants: readonly ConstantConditions[]): Together {
  const seen = new Set<string>()
  let inside: number[] = []
  for (const [at, { label: _, ...conditions }] of constants.entries()) {
    const place = JSON.stringify(conditions)
    if (seen.has(place)) continue
    seen.add(place)
    const grown = growFrom(constants, at)
    if (grown.length > inside.length) inside = grown
  }
  const members = inside.map(at => constants[at]!)
  const judged = comparable(members)
  return {
    inside, warnings: judged.ok ? judged.warnings : [],
    outside: constants.flatMap((one, at) => {
      const with_ = comparable([...members, one])
      return with_.ok ? [] : [{ at, why: `${with_.message} Accepted: ${with_.accepted}` }]
    }),
  }
}

function growFrom(constants: readonly ConstantConditions[], start: number): number[] {
  const places = [start]
  for (const at of constants.keys()) if (at !== start && comparable([...places, at].map(one => constants[one]!)).ok) places.push(at)
  return places.sort((a, b) => a - b)
}

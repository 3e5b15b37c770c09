/**
 * Whether the curves determine a refined constant at all. Where χ² hardly rises when a species is taken away (or made as strong as may be),
 * the answer is a bound, not a value with a huge error.
 */
import type { TitrationCurve } from './curves'
import { minimise, openBench, REACH, startOf, type Bench, type Minimum, type RefinementRefused, type TitrationSystem } from './refine'

/** Rise of χ² (in units of its variance factor) at a one-sided 95 % bound. */
const ONE_SIDED = 2.706

export type Determined =
  /** Both sides close: the value and its error stand. */
  | { readonly name: string, readonly kind: '=' }
  /** χ² stays flat towards zero: the species may be absent. `bound` is the largest log β that the curves allow. */
  | { readonly name: string, readonly kind: '<', readonly bound: number }
  /** χ² stays flat towards strength: `bound` is the smallest log β. */
  | { readonly name: string, readonly kind: '>', readonly bound: number }
  /** Flat on both sides: these curves say nothing about it. */
  | { readonly name: string, readonly kind: 'none' }

/** Judges every refined constant by the profile of χ², the others refined again at every step. */
export function judgeConstants(system: TitrationSystem, curves: readonly TitrationCurve[]): readonly Determined[] | RefinementRefused {
  const bench = openBench(system, curves)
  if ('ok' in bench) return bench
  const best = minimise(bench, startOf(bench), new Map())
  if (best === null) return { ok: false, reason: 'cannotSolve', message: 'At the starting constants the balances of some point cannot be met.', accepted: 'Amounts that agree with the curve, and starting constants within a few units.' }
  return system.refine.map((name, j) => judge(bench, best, { name, j }))
}

function judge(bench: Bench, best: Minimum, { name, j }: { name: string, j: number }): Determined {
  const dof = bench.count - best.full.length
  const allowed = ONE_SIDED * Math.max(1, best.solution.sumOfSquares / dof)
  const origin = startOf(bench)[j]!
  const rise = (value: number): number => {
    const there = minimise(bench, best.full, new Map([[j, value]]))
    // a value at which the balances cannot be met is excluded as surely as one the data reject
    return there === null ? Infinity : there.solution.sumOfSquares - best.solution.sumOfSquares
  }
  const [low, high] = [origin - REACH, origin + REACH]
  const [openBelow, openAbove] = [rise(low) < allowed, rise(high) < allowed]
  if (openBelow && openAbove) return { name, kind: 'none' }
  if (!openBelow && !openAbove) return { name, kind: '=' }
  let inside = openBelow ? low : high
  let outside = openBelow ? high : low
  while (Math.abs(outside - inside) > 1e-3) {
    const middle = (inside + outside) / 2
    if (rise(middle) < allowed) inside = middle
    else outside = middle
  }
  return { name, kind: openBelow ? '<' : '>', bound: inside }
}

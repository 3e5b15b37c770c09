/**
 * The front of unbeaten agents. An agent is beaten if another is no worse on both axes and better on one; lower is better on both.
 */

export interface FrontPoint {
  readonly id: string
  readonly loss_frac: number
  readonly conc_mM: number
  /** Least favourable ends, 95 %: a bound '<' stands at its bound, a value at the upper end of its interval. */
  readonly worst: { readonly loss_frac: number, readonly conc_mM: number }
  /** Most favourable ends that are possible: 0 for a loss known only as "at most". */
  readonly best: { readonly loss_frac: number, readonly conc_mM: number }
}

interface Plain { readonly id: string, readonly loss_frac: number, readonly conc_mM: number }

const byPlace = (a: Plain, b: Plain): number => a.loss_frac - b.loss_frac || a.conc_mM - b.conc_mM || (a.id < b.id ? -1 : 1)

/**
 * Answers "does a rival other than itself beat this point?" in O(log n) after sorting once. Beside the lowest concentration up to each
 * loss the second lowest is kept, so that one agent can be left out.
 */
export function rivalTable(rivals: readonly Plain[]): (point: Plain) => boolean {
  const sorted = [...rivals].sort(byPlace)
  const n = sorted.length
  const lowest = new Float64Array(n)
  const holder: string[] = []
  const second = new Float64Array(n)
  let [low, next, id] = [Infinity, Infinity, '']
  for (const [i, rival] of sorted.entries()) {
    if (rival.conc_mM < low) {
      next = low
      low = rival.conc_mM
      id = rival.id
    }
    else next = Math.min(next, rival.conc_mM)
    lowest[i] = low
    second[i] = next
    holder.push(id)
  }
  const lowestOf = (count: number, except: string): number => (count === 0 ? Infinity : holder[count - 1] === except ? second[count - 1]! : lowest[count - 1]!)
  return point => lowestOf(countUpTo(sorted, point.loss_frac, true), point.id) < point.conc_mM
    || lowestOf(countUpTo(sorted, point.loss_frac, false), point.id) <= point.conc_mM
}

/** How many of the sorted rivals have a loss below, or with `inclusive` up to, the given one. */
function countUpTo(sorted: readonly Plain[], loss_frac: number, inclusive: boolean): number {
  let [from, to] = [0, sorted.length]
  while (from < to) {
    const middle = (from + to) >> 1
    const loss = sorted[middle]!.loss_frac
    if (loss < loss_frac || (inclusive && loss === loss_frac)) from = middle + 1
    else to = middle
  }
  return from
}

export interface FrontResult {
  /** Ids of unbeaten agents, by rising loss. */
  readonly front: readonly string[]
  /** Of those, the ones that stay unbeaten with every bound taken against them. */
  readonly solid: ReadonlySet<string>
}

/** Front of eligible agents, O(n log n). Points with the same two values do not beat one another. */
export function findFront(points: readonly FrontPoint[]): FrontResult {
  const beaten = rivalTable(points)
  const unbeaten = points.filter(p => !beaten(p)).sort(byPlace)
  // each agent at its worst, its rivals where they are drawn or, where they are only bounds, at their best
  const bounded = points.filter(p => p.best.loss_frac !== p.loss_frac || p.best.conc_mM !== p.conc_mM)
  const beatenByBound = rivalTable(bounded.map(p => ({ id: p.id, ...p.best })))
  const solid = unbeaten.map(p => ({ id: p.id, ...p.worst })).filter(p => !beaten(p) && !beatenByBound(p))
  return { front: unbeaten.map(p => p.id), solid: new Set(solid.map(p => p.id)) }
}

export interface Spread {
  readonly id: string
  readonly lnLoss: number
  readonly lnConc: number
  /** Spread of the logarithms; null where there is none (a bound, or no error). */
  readonly lossSpread: number | null
  readonly concSpread: number | null
}

/** 97.5 % point of the normal distribution. */
const Z_95 = 1.959963984540054

/** Pairs that cannot be told apart at 95 % on either axis; agents without an error on an axis are told apart there only by their values. */
export function pairsNotDistinguishable(spreads: readonly Spread[]): Map<string, string[]> {
  const pairs = new Map<string, string[]>(spreads.map(s => [s.id, []]))
  const close = (difference: number, a: number | null, b: number | null): boolean => Math.abs(difference) <= Z_95 * Math.sqrt((a ?? 0) ** 2 + (b ?? 0) ** 2)
  for (let i = 0; i < spreads.length; i++) {
    for (let j = 0; j < i; j++) {
      const [a, b] = [spreads[i]!, spreads[j]!]
      if (close(a.lnLoss - b.lnLoss, a.lossSpread, b.lossSpread) && close(a.lnConc - b.lnConc, a.concSpread, b.concSpread)) {
        pairs.get(a.id)!.push(b.id)
        pairs.get(b.id)!.push(a.id)
      }
    }
  }
  return pairs
}

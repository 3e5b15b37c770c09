/** Where a change first reaches a target as the concentration rises, or the most it comes to (0 at 0 mM where it only falls). */
export type Reach =
  | { readonly kind: 'reached', readonly conc_mM: number }
  | { readonly kind: 'notReached', readonly highest: number, readonly at_mM: number }

const PER_DECADE = 12
const DECADES = 5
const HALVINGS = 60

/** Concentrations looked at: 12 a decade over the five decades below the highest. */
export function concentrationGrid(highest_mM: number): Float64Array {
  const steps = PER_DECADE * DECADES
  const factor = TWELFTH_OF_DECADE
  const grid = new Float64Array(steps + 1)
  grid[steps] = highest_mM
  for (let i = steps - 1; i >= 0; i--) grid[i] = grid[i + 1]! / factor
  return grid
}
/** 10^(1/12), written out: powers differ between engines in the last bit. */
const TWELFTH_OF_DECADE = 1.2115276586285884

/**
 * Smallest concentration up to `highest_mM` at which `change` is at least `target`. The change may pass a maximum: a maximum between two concentrations of the grid is looked
 * for where it could matter.
 * @param change continuous, below the target at 0
 */
export function firstReach(change: (conc_mM: number) => number, target: number, highest_mM: number): Reach {
  const grid = concentrationGrid(highest_mM)
  const values = new Float64Array(grid.length)
  let highest = { value: 0, at: 0 }
  for (let i = 0; i < grid.length; i++) {
    values[i] = change(grid[i]!)
    if (values[i]! >= target) return { kind: 'reached', conc_mM: bisect(change, target, i === 0 ? 0 : grid[i - 1]!, grid[i]!) }
    if (values[i]! > highest.value) highest = { value: values[i]!, at: grid[i]! }
    // A maximum lies between the neighbours of the point before.
    const isPeak = i >= 2 && values[i - 1]! > values[i - 2]! && values[i - 1]! >= values[i]!
    const peak = isPeak ? maximumBetween(change, grid[i - 2]!, grid[i]!) : null
    if (peak && peak.value >= target) return { kind: 'reached', conc_mM: bisect(change, target, grid[i - 2]!, peak.at) }
    if (peak && peak.value > highest.value) highest = peak
  }
  return { kind: 'notReached', highest: highest.value, at_mM: highest.at }
}

function bisect(change: (conc_mM: number) => number, target: number, below: number, above: number): number {
  let [low, high] = [below, above]
  for (let turn = 0; turn < HALVINGS && high - low > 1e-12 * high; turn++) {
    const middle = 0.5 * (low + high)
    if (change(middle) >= target) high = middle
    else low = middle
  }
  return high
}

/** Golden section. */
function maximumBetween(change: (conc_mM: number) => number, from: number, to: number): { at: number, value: number } {
  const share = 0.6180339887498949
  let [low, high] = [from, to]
  let [left, right] = [high - share * (high - low), low + share * (high - low)]
  let [atLeft, atRight] = [change(left), change(right)]
  for (let turn = 0; turn < 40; turn++) {
    if (atLeft >= atRight) {
      high = right
      ;[right, atRight] = [left, atLeft]
      left = high - share * (high - low)
      atLeft = change(left)
    }
    else {
      low = left
      ;[left, atLeft] = [right, atRight]
      right = low + share * (high - low)
      atRight = change(right)
    }
  }
  return atLeft >= atRight ? { at: left, value: atLeft } : { at: right, value: atRight }
}

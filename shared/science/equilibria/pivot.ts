/**
 * The mass balances written on the most abundant independent species instead of on the bare components.
 *
 * Newton's method does not care (the change of variables is linear), but rounding does: with 1 mM metal, 1 mM ligand and
 * K = 10²⁵ the balances on M and L hold to sixteen digits while free M is still wrong in the fifth. Written on ML and
 * L the second balance reads "L − M = difference of the totals", which is exact.
 *
 * @source choice of "master species" by abundance: J. C. Westall, in Chemical Modeling of Aqueous Systems (1979); the elimination here is Gauss–Jordan.
 */

export interface PivotBasis {
  /** Balance k, coefficient of species j, at [k * m + j]; identity on the pivots. */
  readonly rows: Float64Array
  readonly totals: Float64Array
  /** Index of the pivot species of each row. */
  readonly pivots: Int32Array
}

/** True while no species of a row is more than ten times its pivot: the basis then still serves. */
export function basisServes(basis: PivotBasis, c: Float64Array): boolean {
  const m = c.length
  for (let k = 0; k < basis.pivots.length; k++) {
    const ceiling = 10 * c[basis.pivots[k]!]!
    for (let j = 0; j < m; j++) if (c[j]! > ceiling && Math.abs(basis.rows[k * m + j]!) > 1e-9) return false
  }
  return true
}

/** Rewrites the balances on pivots chosen by falling concentration. `order` lists species by falling concentration. */
export function pivotBasis(powers: Float64Array, totals: Float64Array, order: readonly number[]): PivotBasis {
  const n = totals.length
  const m = n === 0 ? 0 : powers.length / n
  const rows = Float64Array.from(powers)
  const right = Float64Array.from(totals)
  const pivots = new Int32Array(n)
  let done = 0
  for (const column of order) {
    if (done === n) break
    const row = largestBelow(rows, { column, from: done, n, m })
    if (row < 0) continue
    swapRows(rows, right, { a: row, b: done, m })
    eliminate(rows, right, { pivot: done, column, n, m })
    pivots[done] = column
    done++
  }
  return { rows, totals: right, pivots }
}

/** Row at or below `from` with the largest entry in a column; −1 where all are zero (a dependent species). */
function largestBelow(rows: Float64Array, at: { column: number, from: number, n: number, m: number }): number {
  let best = -1
  let size = 1e-9
  for (let k = at.from; k < at.n; k++) {
    const entry = Math.abs(rows[k * at.m + at.column]!)
    if (entry > size) {
      size = entry
      best = k
    }
  }
  return best
}

function swapRows(rows: Float64Array, right: Float64Array, swap: { a: number, b: number, m: number }): void {
  if (swap.a === swap.b) return
  for (let j = 0; j < swap.m; j++) {
    const kept = rows[swap.a * swap.m + j]!
    rows[swap.a * swap.m + j] = rows[swap.b * swap.m + j]!
    rows[swap.b * swap.m + j] = kept
  }
  const kept = right[swap.a]!
  right[swap.a] = right[swap.b]!
  right[swap.b] = kept
}

function eliminate(rows: Float64Array, right: Float64Array, at: { pivot: number, column: number, n: number, m: number }): void {
  const { pivot, column, n, m } = at
  const head = rows[pivot * m + column]!
  if (head !== 1) {
    for (let j = 0; j < m; j++) rows[pivot * m + j]! /= head
    right[pivot]! /= head
  }
  for (let k = 0; k < n; k++) {
    const factor = rows[k * m + column]!
    if (k === pivot || factor === 0) continue
    for (let j = 0; j < m; j++) rows[k * m + j]! -= factor * rows[pivot * m + j]!
    right[k]! -= factor * right[pivot]!
  }
}

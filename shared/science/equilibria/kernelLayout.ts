/** Memory of the repeated solver: what is laid out once for many points. */
import type { PivotBasis } from './pivot'
import type { CompiledSystem } from './system'

export interface Kernel {
  readonly system: CompiledSystem
  readonly n: number
  readonly m: number
  /** May be changed by the caller between points: ln β of every species with held components folded in, and the totals, mol/L. */
  readonly lnBeta: Float64Array
  readonly totals_M: Float64Array
  /** ln(free) of the unknowns and the concentration of every species at the last point solved. */
  readonly u: Float64Array
  readonly c: Float64Array
  /** Newton steps of the last point, and the largest relative balance error there. */
  steps: number
  balanceError: number
  readonly work: Work
}

export interface Work {
  /** Largest change of ln(free) the last Newton step asked for. */
  longest: number
  basis: PivotBasis | null
  /** Non-zero entries of the basis by species, laid out as the powers below. */
  readonly basisFirst: Int32Array
  readonly basisIndex: Int32Array
  readonly basisValue: Float64Array
  readonly size: Float64Array
  readonly totals: Float64Array
  readonly trial: Float64Array
  readonly trialC: Float64Array
  readonly gap: Float64Array
  readonly hessian: Float64Array
  readonly scale: Float64Array
  readonly dv: Float64Array
  readonly du: Float64Array
  /** Non-zero powers by species: positions in `index`/`value` from first[j] to first[j + 1]. */
  readonly first: Int32Array
  readonly index: Int32Array
  readonly value: Float64Array
}

/** Lays a compiled system out for repeated solving. */
export function openKernel(system: CompiledSystem): Kernel {
  const n = system.unknowns.length
  const m = system.names.length
  const first = new Int32Array(m + 1)
  const index: number[] = []
  const value: number[] = []
  for (let j = 0; j < m; j++) {
    for (let k = 0; k < n; k++) {
      if (system.powers[k * m + j] === 0) continue
      index.push(k)
      value.push(system.powers[k * m + j]!)
    }
    first[j + 1] = index.length
  }
  const vector = () => new Float64Array(n)
  return {
    system, n, m, lnBeta: system.lnBeta.slice(), totals_M: system.totals_M.slice(), u: vector(), c: new Float64Array(m), steps: 0, balanceError: 0,
    work: {
      longest: 0, basis: null, basisFirst: new Int32Array(m + 1), basisIndex: new Int32Array(n * m), basisValue: new Float64Array(n * m), size: vector(),
      totals: vector(), trial: vector(), trialC: new Float64Array(m), gap: vector(), hessian: new Float64Array(n * n), scale: vector(), dv: vector(), du: vector(),
      first, index: Int32Array.from(index), value: Float64Array.from(value),
    },
  }
}

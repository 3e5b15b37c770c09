/**
 * Random values of one input. Every input has a stream of its own, derived from the seed and the input's name, so that no number moves
 * when agents are added, removed or listed in another order. Only + − × ÷ √ and our own exp and log: the same bits in every engine.
 */
import { exactExp, exactLog } from '../exactMath'
import { createRandom, deriveSeed } from '../random'
import { Z_95 } from './read'

export type Seed = string | number

/** Standard normal deviates of a named input. */
export function normals(seed: Seed, name: readonly (string | number)[], n: number): Float64Array {
  const random = createRandom(deriveSeed(seed, ...name))
  const z = new Float64Array(n)
  for (let i = 0; i < n; i++) z[i] = random.normal()
  return z
}

/** Median v and σ = √ln(1 + (s/v)²): log-normal. */
export function logNormal(value: number, se: number, z: Float64Array): Float64Array {
  const ratio = se / value
  const sigma = Math.sqrt(exactLog(1 + ratio * ratio))
  return z.map(x => value * exactExp(sigma * x))
}

/** Log-normal with a spread of its own on each side of the value, from the ends of a 95 % range. Ends must be above zero. */
export function splitLogNormal(value: number, low: number, high: number, z: Float64Array): Float64Array {
  const below = exactLog(value / low) / Z_95
  const above = exactLog(high / value) / Z_95
  return z.map(x => value * exactExp((x < 0 ? below : above) * x))
}

/**
 * A value known only to lie below a 95 % bound: half-normal whose 95 % point is the bound, cut off there.
 * Deviates beyond the bound are folded back by reflection at it, which keeps one deviate per draw.
 */
export function below(bound: number, z: Float64Array): Float64Array {
  return z.map((x) => {
    let size = Math.abs(x) / Z_95
    while (size > 1) size = Math.abs(2 - size)
    return bound * size
  })
}

/** A value known only to lie above a bound: half-log-normal that puts 95 % within one decade above it. A screening assumption. */
export function above(bound: number, z: Float64Array): Float64Array {
  const sigma = Math.LN10 / Z_95
  return z.map(x => bound * exactExp(sigma * Math.abs(x)))
}

/**
 * Lower Cholesky factor of a correlation matrix (row by row); null where the matrix is not positive semi-definite.
 * A zero pivot (perfect correlation) is allowed.
 */
export function choleskyOf(size: number, correlation: (i: number, j: number) => number): Float64Array | null {
  const factor = new Float64Array(size * size)
  for (let i = 0; i < size; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = i === j ? 1 : correlation(i, j)
      for (let k = 0; k < j; k++) sum -= factor[i * size + k]! * factor[j * size + k]!
      if (i === j) {
        if (sum < -1e-9) return null
        factor[i * size + i] = Math.sqrt(Math.max(0, sum))
      }
      else if (factor[j * size + j]! > 1e-9) factor[i * size + j] = sum / factor[j * size + j]!
      else if (Math.abs(sum) > 1e-6) return null
    }
  }
  return factor
}

/** Turns independent deviates, one array per input, into correlated ones. */
export function correlate(factor: Float64Array, independent: readonly Float64Array[]): Float64Array[] {
  const size = independent.length
  return independent.map((_, i) => {
    const mixed = new Float64Array(independent[0]!.length)
    for (let j = 0; j <= i; j++) {
      const weight = factor[i * size + j]!
      if (weight !== 0) for (let d = 0; d < mixed.length; d++) mixed[d]! += weight * independent[j]![d]!
    }
    return mixed
  })
}

/** Value at a fraction of a sorted list, the nearest rank. */
export function quantileOf(sorted: Float64Array, fraction: number): number {
  return sorted[Math.min(sorted.length - 1, Math.max(0, Math.ceil(fraction * sorted.length) - 1))]!
}

import type { RandomSource } from '../../shared/science/random'

/** A pool of the forward model by which tests make spectra. Water first. */
export interface TestPool { offset_ppm: number, fraction: number, k_per_s: number, rate1_per_s: number, rate2_per_s: number }

export interface Saturation { b0_T: number, b1_uT: number, tsat_s: number, /** Mz of every pool at the start, as a share of its equilibrium. Default 1. */ start?: number }

const GAMMA_rad_per_s_uT = 267.52218708

/**
 * Z of water after a cw block, by the Bloch–McConnell equations with exchange between water and each pool, and e^{At} by scaling, a Taylor series and squaring: slow, plain, and
 * written apart from the code that is tested. k is that from the pool to water, fraction·k that of the way back.
 */
export function zOf(pools: readonly TestPool[], { b0_T, b1_uT, tsat_s, start = 1 }: Saturation, offset_ppm: number): number {
  const n = pools.length
  const size = 3 * n + 1
  const a = Array.from({ length: size }, () => new Float64Array(size))
  const w1 = GAMMA_rad_per_s_uT * b1_uT
  pools.forEach((pool, p) => {
    const [x, y, z] = [3 * p, 3 * p + 1, 3 * p + 2]
    const dw = (pool.offset_ppm - offset_ppm) * GAMMA_rad_per_s_uT * b0_T
    const fraction = p === 0 ? 1 : pool.fraction
    a[x]![x]! -= pool.rate2_per_s
    a[x]![y]! -= dw
    a[y]![x]! += dw
    a[y]![y]! -= pool.rate2_per_s
    a[y]![z]! -= w1
    a[z]![y]! += w1
    a[z]![z]! -= pool.rate1_per_s
    a[z]![size - 1]! += pool.rate1_per_s * fraction
    if (p === 0) return
    for (let c = 0; c < 3; c++) {
      a[3 * p + c]![3 * p + c]! -= pool.k_per_s
      a[3 * p + c]![c]! += pool.k_per_s * pool.fraction
      a[c]![c]! -= pool.k_per_s * pool.fraction
      a[c]![3 * p + c]! += pool.k_per_s
    }
  })
  let m = new Float64Array(size)
  pools.forEach((pool, p) => { m[3 * p + 2] = start * (p === 0 ? 1 : pool.fraction) })
  m[size - 1] = 1
  const e = exponential(a, tsat_s)
  m = Float64Array.from(e, row => row.reduce((sum, value, j) => sum + value * m[j]!, 0))
  return m[2]!
}

function exponential(a: readonly Float64Array[], t: number): Float64Array[] {
  const size = a.length
  const norm = Math.max(...a.map(row => row.reduce((sum, value) => sum + Math.abs(value), 0))) * t
  const halvings = Math.max(0, Math.ceil(Math.log2(norm / 0.25)))
  const scaled = a.map(row => row.map(value => (value * t) / 2 ** halvings))
  let term: Float64Array[] = a.map((_, i) => Float64Array.from({ length: size }, (__, j) => i === j ? 1 : 0))
  let sum: Float64Array[] = term.map(row => row.slice())
  for (let k = 1; k <= 14; k++) {
    term = product(term, scaled).map(row => row.map(value => value / k))
    sum = sum.map((row, i) => row.map((value, j) => value + term[i]![j]!))
  }
  for (let h = 0; h < halvings; h++) sum = product(sum, sum)
  return sum
}

function product(a: readonly Float64Array[], b: readonly Float64Array[]): Float64Array[] {
  return a.map((row) => {
    const out = new Float64Array(row.length)
    row.forEach((value, k) => {
      if (value !== 0) for (let j = 0; j < out.length; j++) out[j]! += value * b[k]![j]!
    })
    return out
  })
}

export const range = (from: number, to: number, step: number): number[] => Array.from({ length: Math.round((to - from) / step) + 1 }, (_, i) => Number((from + i * step).toFixed(6)))

/** Adds normal noise. */
export const noisy = (values: readonly number[], sd: number, random: RandomSource): number[] => values.map(value => value + sd * random.normal())

import type { Propagator } from './propagator'

/** 1/i!. */
const TAYLOR = Array.from({ length: 13 }, (_, i) => {
  let value = 1
  for (let j = 2; j <= i; j++) value /= j
  return value
})
const coefficients = (first: number): readonly [number, number, number] => [TAYLOR[first]!, TAYLOR[first + 1]!, TAYLOR[first + 2]!]
const C0 = coefficients(0)
const C3 = coefficients(3)
const C6 = coefficients(6)
const LEADING: readonly [number, number, number, number] = [TAYLOR[9]!, TAYLOR[10]!, TAYLOR[11]!, TAYLOR[12]!]

/** Taylor polynomial of degree 12 of the matrix entered times `step_s`, in five products, two of them with the zeros skipped. */
export function polynomial({ kernel, matrix, scratch }: Propagator, step_s: number): Float64Array {
  const a = scratch[0]!
  const second = scratch[1]!
  const third = scratch[2]!
  const p = scratch[3]!
  const q = scratch[4]!
  for (let i = 0; i < a.length; i++) a[i] = matrix[i]! * step_s
  kernel.powers(a, second, third, p, LEADING)
  kernel.fold(q, third, p, C6, a, second)
  kernel.fold(p, third, q, C3, a, second)
  kernel.fold(q, third, p, C0, a, second)
  return q
}

/**
 * The same with its derivative in a direction, both symmetric in G form.
 * @param direction times step_s already; zero but in row and column z of water
 */
export function polynomialAndDerivative({ kernel, matrix, scratch }: Propagator, step_s: number, direction: Float64Array): { g: Float64Array, d: Float64Array } {
  const a = scratch[0]!
  const second = scratch[1]!
  const third = scratch[2]!
  const p = scratch[3]!
  const q = scratch[4]!
  const dSecond = scratch[5]!
  const dThird = scratch[6]!
  const dp = scratch[7]!
  const dq = scratch[8]!
  for (let i = 0; i < a.length; i++) a[i] = matrix[i]! * step_s
  kernel.powers(a, second, third, p, LEADING)
  kernel.powersDerivative(a, second, direction, dSecond, dThird, dp, LEADING)
  kernel.foldBoth(dq, third, dThird, p, dp, C6, direction, dSecond)
  kernel.fold(q, third, p, C6, a, second)
  kernel.foldBoth(dp, third, dThird, q, dq, C3, direction, dSecond)
  kernel.fold(p, third, q, C3, a, second)
  kernel.foldBoth(dq, third, dThird, p, dp, C0, direction, dSecond)
  kernel.fold(q, third, p, C0, a, second)
  return { g: q, d: dq }
}

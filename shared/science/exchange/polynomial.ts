import { packedAt, signOf } from './packed'
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

/** Taylor polynomial of degree 12 of the matrix entered times `step_s`, in five products, two of them with the zeros skipped. */
export function polynomial(state: Propagator, step_s: number): Float64Array {
  const { kernel, matrix, scratch } = state
  const [a, second, third, p, q] = scratch as [Float64Array, Float64Array, Float64Array, Float64Array, Float64Array]
  for (let i = 0; i < a.length; i++) a[i] = matrix[i]! * step_s
  kernel.powers(a, second, third)
  leading(p, a, second, third)
  for (let i = 0; i < state.n; i++) p[packedAt(state.n, i, i)]! += signOf(i) * TAYLOR[9]!
  kernel.fold(q, third, p, C6, a, second)
  kernel.fold(p, third, q, C3, a, second)
  kernel.fold(q, third, p, C0, a, second)
  return q
}

/** c10·a + c11·a² + c12·a³. */
function leading(out: Float64Array, a: Float64Array, second: Float64Array, third: Float64Array): void {
  for (let i = 0; i < out.length; i++) out[i] = TAYLOR[12]! * third[i]! + TAYLOR[11]! * second[i]! + TAYLOR[10]! * a[i]!
}

const NOTHING = [0, 0, 0] as const

/**
 * The same with its derivative in a direction, both symmetric in G form.
 * @param direction times step_s already
 */
export function polynomialAndDerivative(state: Propagator, step_s: number, direction: Float64Array): { g: Float64Array, d: Float64Array } {
  const { kernel, matrix, n, scratch } = state
  const [a, second, third, p, q, dSecond, dThird, dp, dq] = scratch as [Float64Array, Float64Array, Float64Array, Float64Array, Float64Array, Float64Array, Float64Array, Float64Array, Float64Array]
  for (let i = 0; i < a.length; i++) a[i] = matrix[i]! * step_s
  kernel.powers(a, second, third)
  kernel.foldBoth(dSecond, a, direction, a, direction, NOTHING, a, a)
  kernel.foldBoth(dThird, a, direction, second, dSecond, NOTHING, a, a)
  leading(p, a, second, third)
  for (let i = 0; i < n; i++) p[packedAt(n, i, i)]! += signOf(i) * TAYLOR[9]!
  leading(dp, direction, dSecond, dThird)
  kernel.foldBoth(dq, third, dThird, p, dp, C6, direction, dSecond)
  kernel.fold(q, third, p, C6, a, second)
  kernel.foldBoth(dp, third, dThird, q, dq, C3, direction, dSecond)
  kernel.fold(p, third, q, C3, a, second)
  kernel.foldBoth(dq, third, dThird, p, dp, C0, direction, dSecond)
  kernel.fold(q, third, p, C0, a, second)
  return { g: q, d: dq }
}

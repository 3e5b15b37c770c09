import * as kernel2 from './kernel2'
import * as kernel3 from './kernel3'
import * as kernel4 from './kernel4'

/** Arithmetic of one matrix size, written out. */
export type Kernel = Pick<typeof kernel2, keyof typeof kernel2>

export const MOST_SOLUTES = 3

/** One shape of object for all sizes: a module is slow to read from, thousands of times a spectrum. */
const kernelFrom = ({ square, powers, powersDerivative, fold, foldBoth, squareDerivative, apply, solveSparse }: Kernel): Kernel => ({ square, powers, powersDerivative, fold, foldBoth, squareDerivative, apply, solveSparse })
const KERNELS: Readonly<Record<number, Kernel>> = { 2: kernelFrom(kernel2), 3: kernelFrom(kernel3), 4: kernelFrom(kernel4) }

/** @param pools water included */
export function kernelOf(pools: number): Kernel {
  const kernel = KERNELS[pools]
  if (!kernel) throw new Error(`There is no kernel for ${pools} pools.`)
  return kernel
}

import * as kernel2 from './kernel2'
import * as kernel3 from './kernel3'
import * as kernel4 from './kernel4'

/** Arithmetic of one matrix size, written out. */
export type Kernel = Pick<typeof kernel2, keyof typeof kernel2>

export const MOST_SOLUTES = 3

/** @param pools water included */
export function kernelOf(pools: number): Kernel {
  if (pools === 2) return kernel2
  if (pools === 3) return kernel3
  if (pools === 4) return kernel4
  throw new Error(`There is no kernel for ${pools} pools.`)
}

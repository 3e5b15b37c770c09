import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { KERNEL_POOLS, kernelFile, kernelSource } from '../../scripts/makeExchangeKernels'

describe('the kernels of the Bloch–McConnell equations', () => {
  it.each(KERNEL_POOLS)('of %i pools are what the script writes', (pools) => {
    expect(readFileSync(kernelFile(pools), 'utf8')).toBe(kernelSource(pools))
  })
})

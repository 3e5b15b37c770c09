/** Place of entry (i, j), i ≤ j, in the packed upper triangle of an n × n matrix. */
export const packedAt = (n: number, i: number, j: number): number => i * n - (i * (i - 1)) / 2 + (j - i)

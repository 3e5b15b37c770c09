/** Place of entry (i, j), i ≤ j, in the packed upper triangle of an n × n matrix. */
export const packedAt = (n: number, i: number, j: number): number => i * n - (i * (i - 1)) / 2 + (j - i)

/** Sign of row i in P = diag(1, −1, 1) per pool. */
export const signOf = (i: number): 1 | -1 => (i % 3 === 1 ? -1 : 1)

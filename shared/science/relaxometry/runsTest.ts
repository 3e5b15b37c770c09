/**
 * Probability of at most this many runs of equal sign if the signs came in random order: small where neighbouring residuals share their sign because the
 * curve does not follow the points.
 * @param residuals in the order of x; zeros are skipped
 * @returns null when all residuals share one sign or none is left
 * @source Wald & Wolfowitz, Ann. Math. Stat. 11, 147 (1940), exact distribution
 */
export function runsP(residuals: readonly number[]): number | null {
  const signs = residuals.filter(r => r !== 0).map(r => r > 0)
  const above = signs.filter(Boolean).length
  const below = signs.length - above
  if (above === 0 || below === 0) return null
  const runs = 1 + signs.slice(1).filter((sign, i) => sign !== signs[i]).length
  let p = 0
  for (let r = 2; r <= runs; r++) p += probabilityOfRuns(r, above, below)
  return Math.min(1, p)
}

function probabilityOfRuns(runs: number, above: number, below: number): number {
  const total = binomial(above + below, above)
  const half = Math.floor(runs / 2)
  if (runs % 2 === 0) return (2 * binomial(above - 1, half - 1) * binomial(below - 1, half - 1)) / total
  return (binomial(above - 1, half) * binomial(below - 1, half - 1) + binomial(above - 1, half - 1) * binomial(below - 1, half)) / total
}

function binomial(n: number, k: number): number {
  if (k < 0 || k > n) return 0
  let product = 1
  for (let i = 1; i <= k; i++) product = (product * (n - k + i)) / i
  return product
}

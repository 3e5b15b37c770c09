/**
 * Protonation of a ligand (or of a complex): stepwise constants, overall constants, the side-reaction coefficient
 * and the share of each form.
 *
 * Stepwise constants run from the first proton taken up, log K1 (the most basic site), to the last.
 * All constants are concentration constants, so `pcH` is −log10 [H⁺], not the reading of a pH electrode (see activity.ts).
 *
 * @source A. Ringbom, Complexation in Analytical Chemistry (Wiley, 1963), side-reaction coefficients.
 */

const LN10 = Math.LN10

/** log10(Σ 10^x) without overflow; −∞ for an empty list. */
export function log10Sum(exponents: readonly number[]): number {
  const top = exponents.reduce((a, b) => (b > a ? b : a), -Infinity)
  if (top === -Infinity || top === Infinity) return top
  let sum = 0
  for (const x of exponents) sum += Math.exp((x - top) * LN10)
  return top + Math.log(sum) / LN10
}

/** Overall log β_j (j protons) from stepwise log K_1 … log K_n. */
export function overallFromStepwise(logStepwise: readonly number[]): number[] {
  let sum = 0
  return logStepwise.map(step => (sum += step))
}

/** Stepwise log K_j from overall log β_j. */
export function stepwiseFromOverall(logOverall: readonly number[]): number[] {
  return logOverall.map((beta, j) => (j === 0 ? beta : beta - logOverall[j - 1]!))
}

/** Stepwise protonation constants from pKa listed in the usual order (most acidic first). */
export function stepwiseFromAcidConstants(pKa: readonly number[]): number[] {
  return [...pKa].reverse()
}

/** Σ pKa, the measure of basicity that log K is plotted against. */
export function basicity(logStepwise: readonly number[]): number {
  return logStepwise.reduce((a, b) => a + b, 0)
}

/**
 * log10 α_H with α_H = 1 + Σ β_j [H]^j: total ligand that holds no metal, over its fully deprotonated form.
 * Zero protonation constants give 0 (no side reaction).
 */
export function logAlphaProton(logStepwise: readonly number[], pcH: number): number {
  return log10Sum([0, ...overallFromStepwise(logStepwise).map((beta, j) => beta - (j + 1) * pcH)])
}

/** Share of each form, from fully deprotonated to fully protonated; sums to 1. */
export function protonShares(logStepwise: readonly number[], pcH: number): number[] {
  const exponents = [0, ...overallFromStepwise(logStepwise).map((beta, j) => beta - (j + 1) * pcH)]
  const total = log10Sum(exponents)
  return exponents.map(x => Math.exp((x - total) * LN10))
}

/** Mean number of protons bound at `pcH`. */
export function meanProtons(logStepwise: readonly number[], pcH: number): number {
  return protonShares(logStepwise, pcH).reduce((sum, share, j) => sum + j * share, 0)
}

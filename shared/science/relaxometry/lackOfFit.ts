import { fUpperP } from '../statistics'

/** Test of a straight line against the scatter of tubes that share a concentration. */
export interface LackOfFit { readonly f: number, readonly dof1: number, readonly dof2: number, readonly p: number }

/**
 * Lack of fit: what the line leaves beyond the scatter between tubes of one concentration, F = (SS_lack/(m − 2))/(SS_pure/(n − m)) with n tubes at m concentrations.
 * @param sigma error of each rate as the line weighs it; null for an unweighted line
 * @param rss weighted residual sum of squares of the line
 * @returns null with fewer than three concentrations, or without a concentration that two tubes share
 * @source Draper & Smith, Applied Regression Analysis, 3rd ed. (1998), section 2.1
 */
export function testLackOfFit(conc_mM: readonly number[], rate_per_s: readonly number[], sigma: readonly number[] | null, rss: number): LackOfFit | null {
  const groups = new Map<number, number[]>()
  conc_mM.forEach((conc, i) => groups.set(conc, [...groups.get(conc) ?? [], i]))
  const [n, m] = [conc_mM.length, groups.size]
  if (m < 3 || n <= m) return null
  const weight = (i: number) => sigma ? 1 / sigma[i]! ** 2 : 1
  let pure = 0
  for (const members of groups.values()) {
    const total = members.reduce((sum, i) => sum + weight(i), 0)
    const mean = members.reduce((sum, i) => sum + weight(i) * rate_per_s[i]!, 0) / total
    pure += members.reduce((sum, i) => sum + weight(i) * (rate_per_s[i]! - mean) ** 2, 0)
  }
  if (!(pure > 0)) return null
  const [dof1, dof2] = [m - 2, n - m]
  const f = Math.max(0, rss - pure) / dof1 / (pure / dof2)
  return { f, dof1, dof2, p: fUpperP(f, dof1, dof2) }
}

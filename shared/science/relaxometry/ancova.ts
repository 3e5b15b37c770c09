import { fUpperP } from '../statistics'
import { fitLine } from '../least-squares/line'

export interface BatchLine {
  readonly label: string
  readonly conc_mM: readonly number[]
  readonly rate_per_s: readonly number[]
  /** Null for an unweighted comparison of all batches. */
  readonly rateSe_per_s: readonly number[] | null
}

export interface EqualSlopes {
  readonly ok: true
  readonly slopes: readonly { readonly label: string, readonly slope_per_mM_s: number, readonly se_per_mM_s: number | null }[]
  readonly commonSlope_per_mM_s: number
  readonly commonSe_per_mM_s: number
  readonly f: number
  readonly dof1: number
  readonly dof2: number
  /** Probability of an F this large if all batches had one slope. */
  readonly p: number
}

/**
 * Tests whether several batches have one relaxivity: lines with a slope and an intercept of their own each, against one common slope with an intercept each.
 * Weighted where every batch has errors; the scatter about the separate lines is the yardstick, so errors that are all too small by one factor do no harm.
 * @returns a refusal with fewer than two batches, a batch without a line, or no degrees of freedom left
 * @source Draper & Smith, Applied Regression Analysis, 3rd ed. (1998), chapter 14: analysis of covariance
 */
export function testEqualSlopes(batches: readonly BatchLine[]): EqualSlopes | { readonly ok: false, readonly reason: 'tooFewBatches' | 'noLine' | 'noFreedom', readonly message: string } {
  if (batches.length < 2) return { ok: false, reason: 'tooFewBatches', message: 'Slopes can be compared between two or more batches.' }
  const isWeighted = batches.every(batch => batch.rateSe_per_s !== null)
  let between = 0
  let spread = 0
  let rss = 0
  let dof2 = 0
  const slopes: { label: string, slope_per_mM_s: number, se_per_mM_s: number | null }[] = []
  const parts: { slope: number, sxx: number }[] = []
  for (const { label, conc_mM, rate_per_s, rateSe_per_s } of batches) {
    const line = fitLine({ x: conc_mM, y: rate_per_s, sigma: isWeighted ? rateSe_per_s : null })
    if (!line.ok) return { ok: false, reason: 'noLine', message: `${label}: ${line.message}` }
    const sxx = weightedSpread(conc_mM, isWeighted ? rateSe_per_s : null)
    slopes.push({ label, slope_per_mM_s: line.slope, se_per_mM_s: line.slopeSe })
    parts.push({ slope: line.slope, sxx })
    spread += sxx
    between += sxx * line.slope
    rss += line.rss
    dof2 += line.dof
  }
  if (dof2 < 1) return { ok: false, reason: 'noFreedom', message: 'Two tubes per batch leave no scatter to compare the slopes with.' }
  const common = between / spread
  const dof1 = batches.length - 1
  const excess = parts.reduce((sum, part) => sum + part.sxx * (part.slope - common) ** 2, 0)
  const f = excess / dof1 / (rss / dof2)
  const commonVariance = (rss + excess) / (dof2 + dof1)
  return {
    ok: true, slopes, commonSlope_per_mM_s: common, commonSe_per_mM_s: Math.sqrt((isWeighted ? Math.max(1, commonVariance) : commonVariance) / spread), f, dof1, dof2, p: fUpperP(f, dof1, dof2),
  }
}

function weightedSpread(x: readonly number[], sigma: readonly number[] | null): number {
  const weights = x.map((_, i) => sigma ? 1 / sigma[i]! ** 2 : 1)
  const total = weights.reduce((sum, w) => sum + w, 0)
  const mean = x.reduce((sum, value, i) => sum + weights[i]! * value, 0) / total
  return x.reduce((sum, value, i) => sum + weights[i]! * (value - mean) ** 2, 0)
}

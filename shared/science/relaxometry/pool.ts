import { chi2UpperP, inverseVarianceMean, tQuantile } from '../statistics'

/** One measured value of a quantity that is measured again. */
export interface Replicate {
  readonly value: number
  readonly se: number
  /** The part of `se` that all repeats of one preparation share (assay of the stock): averaging does not lessen it. Left out: none. */
  readonly commonSe?: number
  /** Independent preparation or day it belongs to. */
  readonly preparation: string
}

export interface Pooled {
  readonly ok: true
  readonly value: number
  readonly se: number
  readonly interval: readonly [number, number] | null
  /** Independent preparations: always shown. */
  readonly preparations: number
  /** Standard deviation between preparations beyond their own errors; null with one preparation. */
  readonly betweenSd: number | null
  /** p that the preparations differ no more than their errors allow; null with one preparation. */
  readonly homogeneityP: number | null
  readonly level: number
}

/**
 * Pools replicates. Repeats within one preparation are averaged by the inverse variance of their own errors (scaled up where they disagree), what they share is added; the preparations are then
 * weighted by 1/(SE² + τ²) with the between-preparation variance τ² of Paule and Mandel, and the interval is Hartung and Knapp's with preparations − 1 degrees
 * of freedom, never narrower than the plain one.
 * @returns a refusal for no replicate or an error that is not above 0
 * @source Paule & Mandel, J. Res. Natl. Bur. Stand. 87, 377 (1982); Hartung & Knapp, Stat. Med. 20, 3875 (2001)
 */
export function poolReplicates(replicates: readonly Replicate[], level = 0.95): Pooled | { readonly ok: false, readonly reason: 'none' | 'badError', readonly message: string } {
  if (replicates.length === 0) return { ok: false, reason: 'none', message: 'There is nothing to pool.' }
  const bad = replicates.findIndex(({ value, se, commonSe = 0 }) => !Number.isFinite(value) || !(se > 0 && se < Infinity) || !(commonSe >= 0 && commonSe < se))
  if (bad >= 0) return { ok: false, reason: 'badError', message: `Replicate ${bad + 1} has no value with an error above 0, of which the common part is less.` }
  const groups = [...new Set(replicates.map(r => r.preparation))].map(name => poolWithin(replicates.filter(r => r.preparation === name)))
  const k = groups.length
  if (k === 1) return { ok: true, value: groups[0]!.value, se: groups[0]!.se, interval: null, preparations: 1, betweenSd: null, homogeneityP: null, level }
  const values = groups.map(g => g.value)
  const variances = groups.map(g => g.se ** 2)
  const between = betweenVariance(values, variances)
  const pooled = inverseVarianceMean(values, variances.map(v => Math.sqrt(v + between)))
  const scale = Math.max(1, pooled.chi2 / (k - 1))
  const se = pooled.se * Math.sqrt(scale)
  const half = tQuantile((1 + level) / 2, k - 1) * se
  const chi2 = inverseVarianceMean(values, groups.map(g => g.se)).chi2
  return {
    ok: true, value: pooled.mean, se, interval: [pooled.mean - half, pooled.mean + half], preparations: k, betweenSd: Math.sqrt(between), homogeneityP: chi2UpperP(chi2, k - 1), level,
  }
}

function poolWithin(replicates: readonly Replicate[]): { value: number, se: number } {
  const own = replicates.map(({ se, commonSe = 0 }) => Math.sqrt(se ** 2 - commonSe ** 2))
  const { mean, se, chi2 } = inverseVarianceMean(replicates.map(r => r.value), own)
  const common = replicates.reduce((sum, r, i) => sum + (se / own[i]!) ** 2 * (r.commonSe ?? 0), 0)
  return { value: mean, se: Math.hypot(se * Math.sqrt(Math.max(1, replicates.length > 1 ? chi2 / (replicates.length - 1) : 1)), common) }
}

/** τ² ≥ 0 at which the weighted scatter equals its expectation k − 1; 0 where it is below that already. */
function betweenVariance(values: readonly number[], variances: readonly number[]): number {
  const excess = (between: number) => inverseVarianceMean(values, variances.map(v => Math.sqrt(v + between))).chi2 - (values.length - 1)
  if (excess(0) <= 0) return 0
  let high = Math.max(...variances)
  while (excess(high) > 0) high *= 2
  let low = 0
  for (let turn = 0; turn < 200 && high - low > 1e-15 * high; turn++) {
    const middle = (low + high) / 2
    if (excess(middle) > 0) low = middle
    else high = middle
  }
  return (low + high) / 2
}

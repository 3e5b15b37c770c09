import { fitLorentzians, type LorentzianFit, type LorentzianOptions, type PooledSpectrum, type PoolStart } from './lorentzianFit'
import type { ExchangeRefusal } from './refusal'

/** Fits with more and more pools, side by side. */
export interface CountedFits {
  readonly fits: readonly { readonly count: number, readonly pools: readonly PoolStart[], readonly outcome: LorentzianFit | ExchangeRefusal, readonly deltaAicc: number | null }[]
  /** Number of pools with the least AICc among the fits whose pools are all off their bounds; null where none can be told. */
  readonly preferred: number | null
}

/**
 * Fits a spectrum with each number of pools asked for and compares them by AICc. The pools given come first; more are placed where the fit before them leaves
 * the deepest dip.
 * @param known water first, then the pools of the agent
 * @param counts from and to, 2 to 6
 */
export function compareCounts(spectrum: PooledSpectrum, known: readonly PoolStart[], [from, to]: readonly [number, number], options: LorentzianOptions): CountedFits {
  const fits: { count: number, pools: readonly PoolStart[], outcome: LorentzianFit | ExchangeRefusal }[] = []
  let pools: readonly PoolStart[] = known.slice(0, from)
  let last = fitLorentzians(spectrum, pools, options)
  while (pools.length <= to) {
    if (pools.length >= from) fits.push({ count: pools.length, pools, outcome: last })
    const next = known[pools.length] ?? (last.ok ? proposePool(spectrum, last) : null)
    if (next === null) break
    pools = [...pools, next]
    if (pools.length <= to) last = fitLorentzians(spectrum, pools, options)
  }
  const aiccs = fits.flatMap(({ outcome }) => outcome.ok && outcome.aicc !== null ? [outcome.aicc] : [])
  const least = Math.min(...aiccs)
  const usable = fits.filter(({ outcome }) => outcome.ok && outcome.aicc !== null && outcome.pools.every(pool => !pool.depth.atBound && !pool.width_ppm.atBound && !pool.offset_ppm.atBound))
  const best = usable.reduce<(typeof usable)[number] | null>((a, b) => a === null || (b.outcome as LorentzianFit).aicc! < (a.outcome as LorentzianFit).aicc! ? b : a, null)
  return { fits: fits.map(one => ({ ...one, deltaAicc: one.outcome.ok && one.outcome.aicc !== null ? one.outcome.aicc - least : null })), preferred: best?.count ?? null }
}

/** A pool where the residuals of a fit dip deepest, averaged over three points; null where no three neighbours lie below the fit. */
export function proposePool({ offset_ppm: x }: PooledSpectrum, fit: LorentzianFit): PoolStart | null {
  const { residuals } = fit
  let deepest = { dip: 0, at: -1 }
  for (let i = 1; i + 1 < x.length; i++) {
    const three = [residuals[i - 1]!, residuals[i]!, residuals[i + 1]!]
    const dip = -(three[0]! + three[1]! + three[2]!) / 3
    if (three.every(one => one < 0) && dip > deepest.dip) deepest = { dip, at: i }
  }
  if (deepest.at < 0) return null
  const centre = x[deepest.at]!
  const span = x.at(-1)! - x[0]!
  const step = (x[deepest.at + 1]! - x[deepest.at - 1]!) / 2
  return {
    name: `Pool ${fit.pools.length + 1}`, offset_ppm: centre, offsetRange_ppm: [Math.max(x[0]!, centre - 6 * step), Math.min(x.at(-1)!, centre + 6 * step)],
    width_ppm: 4 * step, widthRange_ppm: [step, span], depthRange: [0, 1],
  }
}

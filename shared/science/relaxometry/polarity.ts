import { prepareData, refuse, type FitData } from '../least-squares/fitData'
import { fitModel, type FitOptions } from '../least-squares/fitModel'
import type { FitOutcome, FitRefused } from '../least-squares/outcome'
import { createSearches, type Projection, type Searches, type SeparableSearch } from '../least-squares/varpro'
import type { Model, Settings } from '../models/define'

/** Ratio of the runner-up's residual sum of squares to the best one's up to which the polarity is not settled. */
export const AMBIGUOUS_RATIO = 1.5

export interface Polarity {
  readonly ok: true
  /** +1 or −1 for each point given; left-out points follow their neighbours in time. */
  readonly signs: readonly (1 | -1)[]
  /** Magnitude times sign. */
  readonly signal: readonly number[]
  readonly rss: number
  readonly t1_s: number
  /** The next best sign change, and the signs that belong to it; null when there is no other. */
  readonly runnerUp: { readonly rss: number, readonly t1_s: number, readonly signal: readonly number[] } | null
  /** True where the runner-up's rss is within 1.5 times the best. */
  readonly isAmbiguous: boolean
}

/** A tube of inversion recovery, fitted. */
export interface RecoveryFit {
  readonly fit: FitOutcome
  /** Null for signed data, or when the polarity could not be tried. */
  readonly polarity: Polarity | null
  /** The fit with the runner-up's signs where the polarity is ambiguous. */
  readonly alternative: FitOutcome | null
  /** Relative standard deviations that the fit found for itself and was weighted with. Left out: none. */
  readonly relativeSigma?: readonly number[] | null
}

/**
 * Fits inversion recovery to signed or magnitude data; magnitude data get their polarity restored first.
 * @param signal 'magnitude' where the sign was lost in the reconstruction
 */
export function fitRecovery(model: Model, data: FitData, signal: 'signed' | 'magnitude', options: FitOptions = {}): RecoveryFit {
  if (signal === 'signed') return { fit: fitModel(model, data, options), polarity: null, alternative: null }
  const polarity = restorePolarity(model, data, options.settings, options.searches)
  if (!polarity.ok) return { fit: polarity, polarity: null, alternative: null }
  const fit = fitModel(model, { ...data, y: polarity.signal }, options)
  const isShown = polarity.isAmbiguous && polarity.runnerUp !== null
  return { fit, polarity, alternative: isShown ? fitModel(model, { ...data, y: polarity.runnerUp!.signal }, options) : null }
}

/**
 * Restores the polarity of magnitude data: every sign change between two inversion times is tried, all points before it negative and all after it
 * positive, and the one with the smallest residual sum of squares kept. Repeats at one inversion time share a sign.
 * @returns a refusal for negative magnitudes and for a model without a separable part, besides what a fit refuses
 * @source Barral et al., Magn. Reson. Med. 64, 1057 (2010)
 */
export function restorePolarity(model: Model, data: FitData, given: Settings = {}, searches: Searches = createSearches()): Polarity | FitRefused {
  const negative = data.y.findIndex(value => value < 0)
  if (negative >= 0) {
    return refuse('outOfDomain', `Point ${negative + 1}: the signal ${data.y[negative]} is negative, which a magnitude cannot be.`, 'Magnitudes of 0 or more, or the data declared as signed.')
  }
  const prepared = prepareData(model, data, given, model.names.length)
  if (!prepared.ok) return prepared
  const { x, y, sigma, settings } = prepared
  const search = searches.find(model, { x, sigma, settings })
  if (!search || !model.separable) throw new Error(`Model ${model.id} has no separable part, so polarity cannot be restored with it.`)
  const candidates = signChanges(x, y).map(from => ({ from, ...project(search, x, y, from) }))
    .filter(candidate => model.separable!.isUpright(candidate.linear)).sort((a, b) => a.rss - b.rss)
  const [best, second = null] = candidates
  if (!best) return refuse('noStart', 'No choice of signs gives a recovery from inversion.', 'Inversion-recovery magnitudes that fall to a null and rise again, or signed data.')
  const signed = (from: number) => data.y.map((value, i) => data.x[i]! < from ? -value : value)
  const rounding = y.length * (1e-12 * Math.max(...y)) ** 2
  return {
    ok: true, signs: data.x.map(ti => ti < best.from ? -1 : 1), signal: signed(best.from), rss: best.rss, t1_s: best.tau,
    runnerUp: second && { rss: second.rss, t1_s: second.tau, signal: signed(second.from) },
    isAmbiguous: second !== null && second.rss <= AMBIGUOUS_RATIO * best.rss + rounding,
  }
}

/** First positive time of each sign change worth trying; a time at which every magnitude is zero has no sign to change. */
function signChanges(x: readonly number[], y: readonly number[]): number[] {
  const times = [...new Set(x)].sort((a, b) => a - b)
  const hasSign = times.map(time => x.some((ti, i) => ti === time && y[i]! > 0))
  return [...times, Infinity].filter((_, k) => k === 0 || hasSign[k - 1])
}

function project(search: SeparableSearch, x: readonly number[], y: readonly number[], from: number): Projection {
  return search.search(y.map((value, i) => x[i]! < from ? -value : value))
}

import type { FitDone, FittedParameter } from '../least-squares/outcome'
import { tQuantile, tTwoSidedP } from '../statistics'
import type { BlankRange } from './blankRanges'
import type { Polarity } from './polarity'
import { runsP } from './runsTest'

/** What the flags of one tube look at. */
export interface TubeContext {
  readonly fit: FitDone
  /** Times (or angles) of all points given, left-out ones included. */
  readonly x: readonly number[]
  /** Signal as fitted, polarity restored. */
  readonly signal_au: readonly number[]
  /** Relaxation time that is reported; null where the fit gives none. */
  readonly headline: Pick<FittedParameter, 'value' | 'se' | 'label'> | null
  /** Time constant of the curve itself: T1* where T1 follows from it, otherwise the headline. */
  readonly curveTime_s: number | null
  readonly polarity: Polarity | null
  /** Fit with the runner-up's polarity. */
  readonly alternative: FitDone | null
  /** The same decay with an offset, where one was tried. */
  readonly withOffset: FitDone | null
  /** Noise of one point and where it comes from; null when unknown. */
  readonly noise: { readonly sigma_au: number, readonly source: string } | null
  /** Expected ranges for a blank; empty for other tubes and for conditions without a record. */
  readonly blankRanges: readonly BlankRange[]
  readonly isBlank: boolean
}

/** What a test found: null = it does not apply here. tube: the one it is about, counted from 1 along the line; absent where it is about the whole. */
export type FlagFinding = { readonly isRaised: boolean, readonly detail: string, readonly tube?: number } | null

export interface Flag<C> {
  readonly id: string
  readonly title: string
  readonly test: (context: C) => FlagFinding
  /** What to do about it. */
  readonly advice: string
}

/** One tested flag; passed ones are reported as well. */
export interface FlagReport {
  readonly id: string
  readonly title: string
  readonly state: 'raised' | 'passed' | 'notApplicable'
  readonly detail: string | null
  readonly advice: string
  readonly tube: number | null
}

/** Tests every flag of a list. */
export function reportFlags<C>(flags: readonly Flag<C>[], context: C): FlagReport[] {
  return flags.map(({ id, title, test, advice }) => {
    const finding = test(context)
    return { id, title, advice, state: finding === null ? 'notApplicable' : finding.isRaised ? 'raised' : 'passed', detail: finding && finding.detail, tube: finding?.tube ?? null }
  })
}

export const usedOf = ({ fit, x }: Pick<TubeContext, 'fit' | 'x'>): number[] => x.flatMap((_, i) => fit.residuals[i] === null ? [] : [i])
export const inOrder = (context: TubeContext): number[] => usedOf(context).sort((i, j) => context.x[i]! - context.x[j]!)
export const digits = (value: number): string => Number(value.toPrecision(3)).toString()
export const percent = (fraction: number): string => `${digits(100 * fraction)} %`

function findOutliers({ fit }: TubeContext): FlagFinding {
  const judged = fit.studentised.flatMap((t, i) => t === null ? [] : [{ point: i + 1, size: Math.abs(t) }])
  if (judged.length === 0 || fit.dof < 2) return null
  const limit = tQuantile(1 - 0.05 / (2 * judged.length), fit.dof - 1)
  const worst = judged.reduce((a, b) => b.size > a.size ? b : a)
  return { isRaised: worst.size > limit, detail: `Point ${worst.point} has the largest studentised residual, ${digits(worst.size)}; the limit for ${judged.length} points is ${digits(limit)}.` }
}

function testRuns(context: TubeContext): FlagFinding {
  const p = runsP(inOrder(context).map(i => context.fit.residuals[i]!))
  return p === null ? null : { isRaised: p < 0.05, detail: `Probability of so few changes of sign: ${digits(p)}.` }
}

function testBlank({ isBlank, headline, blankRanges }: TubeContext): FlagFinding {
  if (!isBlank || !headline || blankRanges.length === 0) return null
  const isInside = blankRanges.some(range => headline.value >= range.low_s && headline.value <= range.high_s)
  const expected = blankRanges.map(range => `${range.low_s} to ${range.high_s} s${range.aeration ? ` (${range.aeration === 'degassed' ? 'degassed' : 'air-saturated'})` : ''}`).join(' or ')
  return { isRaised: !isInside, detail: `${headline.label} is ${digits(headline.value)} s; expected ${expected}.` }
}

/** Three or more of the largest signals exactly equal: a receiver or a number format at its end. */
function testClipping(context: TubeContext): FlagFinding {
  const sizes = usedOf(context).map(i => Math.abs(context.signal_au[i]!))
  const largest = Math.max(...sizes)
  const equal = sizes.filter(size => size === largest).length
  return { isRaised: equal >= 3 && equal < sizes.length, detail: equal === 1 ? 'The largest signal stands alone.' : `${equal} points share the largest signal, ${digits(largest)}.` }
}

/** Mean of the last third of the points against that of the first, in units of the scatter. */
function testDirection(expected: 'rises' | 'falls'): (context: TubeContext) => FlagFinding {
  return (context) => {
    const order = inOrder(context)
    const third = Math.floor(order.length / 3)
    if (third < 1) return null
    const mean = (points: number[]) => points.reduce((sum, i) => sum + context.signal_au[i]!, 0) / points.length
    const change = mean(order.slice(-third)) - mean(order.slice(0, third))
    const isWrong = expected === 'rises' ? change < 0 : change > 0
    const noise = context.noise?.sigma_au ?? 0
    return { isRaised: isWrong && Math.abs(change) > 3 * noise / Math.sqrt(third), detail: `The signal ${change > 0 ? 'rises' : 'falls'} by ${digits(Math.abs(change))} from its first third to its last.` }
  }
}

/** Alternating residuals of a train: the echoes of odd number read too low where refocusing is imperfect. */
export function testEvenOdd(context: TubeContext): FlagFinding {
  const order = inOrder(context)
  if (order.length < 6 || context.fit.dof < 3) return null
  const residuals = order.map(i => context.fit.residuals[i]!)
  const contrast = residuals.reduce((sum, e, k) => sum + (k % 2 === 0 ? -e : e), 0)
  const size = Math.sqrt(residuals.reduce((sum, e) => sum + e * e, 0) / context.fit.dof * residuals.length)
  if (!(size > 0)) return null
  const p = tTwoSidedP(contrast / size, context.fit.dof)
  return { isRaised: p < 0.01, detail: `Even against odd echoes: t = ${digits(contrast / size)}, p ${p < 0.001 ? 'below 0.001' : `= ${digits(p)}`}.` }
}

/** Tests that hold for every tube, whatever was measured. `more` says what to measure where there are too few points. */
export function commonFlags({ more, expected }: { more: string, expected: 'rises' | 'falls' | null }): Flag<TubeContext>[] {
  const flags: Flag<TubeContext>[] = [
    {
      id: 'fewPoints', title: 'Fewer than five points', advice: `Measure more ${more}.`,
      test: context => ({ isRaised: usedOf(context).length < 5, detail: `${usedOf(context).length} points are used.` }),
    },
    {
      id: 'largeError', title: 'Standard error above 5 %', advice: 'Look for outliers, or measure again with more signal.',
      test: ({ headline }) => {
        if (!headline || headline.se === null) return null
        return { isRaised: headline.se > 0.05 * headline.value, detail: `The standard error is ${percent(headline.se / headline.value)} of ${headline.label}.` }
      },
    },
    {
      id: 'noInterval', title: 'No interval can be stated', advice: 'Leave the tube out, or measure it again: its time carries no error.',
      test: ({ fit, headline }) => ({
        isRaised: fit.noInterval !== null || headline === null,
        detail: fit.noInterval?.message ?? (headline === null ? 'The parameters give no relaxation time.' : 'The fit converged inside its bounds.'),
      }),
    },
    {
      id: 'onBound', title: 'A parameter on a bound', advice: 'Check timing and model: a bound reached means the points do not fit them.',
      test: ({ fit }) => {
        const held = fit.parameters.filter(p => p.atBound)
        return { isRaised: held.length > 0, detail: held.length > 0 ? `${held.map(p => p.label).join(', ')} on a bound.` : 'All parameters lie inside their bounds.' }
      },
    },
    { id: 'outlier', title: 'Outlier', advice: 'Look at the point in the raw data; leave it out with a reason if it is faulty.', test: findOutliers },
    { id: 'runs', title: 'Residuals in runs', advice: 'The curve does not follow the points: check timing and model and, for magnitudes, polarity or noise floor.', test: testRuns },
    { id: 'clipped', title: 'Signal cut off at its top', advice: 'Lower the receiver gain or the scale of the export and measure again; points at the limit read too low.', test: testClipping },
    { id: 'blankOutside', title: 'Blank outside the expected range', advice: 'Check temperature, aeration and contamination of the blank.', test: testBlank },
    {
      id: 'secondOpinion', title: 'A lower minimum exists', advice: 'Do not sign: report the tube, and fit it again from other start values.',
      test: ({ fit }) => fit.secondOpinion && {
        isRaised: !fit.secondOpinion.agrees, detail: fit.secondOpinion.agrees ? 'An independent program finds no lower minimum.' : 'An independent program finds a lower sum of squares.',
      },
    },
  ]
  if (expected === null) return flags
  const word = expected === 'rises' ? 'A recovery that falls' : 'A decay that grows'
  return [...flags, { id: 'wrongWay', title: word, advice: 'Check which column is the time, its unit and the sign of the signals.', test: testDirection(expected) }]
}

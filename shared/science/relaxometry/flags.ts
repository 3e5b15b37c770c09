import type { FitDone } from '../least-squares/outcome'
import { tQuantile } from '../statistics'
import type { BlankRange } from './blankRanges'
import type { Polarity } from './polarity'
import { runsP } from './runsTest'

/** What the flags of one recovery tube look at. */
export interface TubeContext {
  readonly fit: FitDone
  readonly ti_s: readonly number[]
  /** Signal as fitted, polarity restored. */
  readonly signal_au: readonly number[]
  readonly polarity: Polarity | null
  /** Fit with the runner-up's polarity. */
  readonly alternative: FitDone | null
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

const t1Of = (fit: FitDone) => fit.parameters.find(p => p.name === 't1_s')
const usedOf = ({ fit, ti_s }: TubeContext) => ti_s.flatMap((_, i) => fit.residuals[i] === null ? [] : [i])
const digits = (value: number) => Number(value.toPrecision(3)).toString()
const percent = (fraction: number) => `${digits(100 * fraction)} %`

/** Compares T1 with a time of the acquisition; not applicable where T1 was held. */
function compareWithT1(context: TubeContext, pick: (times: number[]) => number, judge: (time_s: number, t1_s: number) => FlagFinding): FlagFinding {
  const t1 = t1Of(context.fit)
  return t1 ? judge(pick(usedOf(context).map(i => context.ti_s[i]!)), t1.value) : null
}

function findOutliers({ fit }: TubeContext): FlagFinding {
  const judged = fit.studentised.flatMap((t, i) => t === null ? [] : [{ point: i + 1, size: Math.abs(t) }])
  if (judged.length === 0 || fit.dof < 2) return null
  const limit = tQuantile(1 - 0.05 / (2 * judged.length), fit.dof - 1)
  const worst = judged.reduce((a, b) => b.size > a.size ? b : a)
  return { isRaised: worst.size > limit, detail: `Point ${worst.point} has the largest studentised residual, ${digits(worst.size)}; the limit for ${judged.length} points is ${digits(limit)}.` }
}

function testRuns(context: TubeContext): FlagFinding {
  const order = usedOf(context).sort((i, j) => context.ti_s[i]! - context.ti_s[j]!)
  const p = runsP(order.map(i => context.fit.residuals[i]!))
  return p === null ? null : { isRaised: p < 0.05, detail: `Probability of so few changes of sign: ${digits(p)}.` }
}

function testSignal(context: TubeContext): FlagFinding {
  if (!context.noise) return null
  const { sigma_au, source } = context.noise
  const ratio = Math.max(...usedOf(context).map(i => Math.abs(context.signal_au[i]!))) / sigma_au
  return { isRaised: ratio < 5, detail: `The largest signal is ${digits(ratio)} times the noise (σ = ${digits(sigma_au)}, ${source}).` }
}

function testBlank({ isBlank, fit, blankRanges }: TubeContext): FlagFinding {
  const t1 = t1Of(fit)
  if (!isBlank || !t1 || blankRanges.length === 0) return null
  const isInside = blankRanges.some(range => t1.value >= range.low_s && t1.value <= range.high_s)
  const expected = blankRanges.map(range => `${range.low_s} to ${range.high_s} s${range.aeration ? ` (${range.aeration === 'degassed' ? 'degassed' : 'air-saturated'})` : ''}`).join(' or ')
  return { isRaised: !isInside, detail: `T1 is ${digits(t1.value)} s; expected ${expected}.` }
}

/** Flags of one inversion-recovery tube. */
export const TUBE_FLAGS: readonly Flag<TubeContext>[] = [
  {
    id: 'shortSampling', title: 'Longest TI under 3·T1', advice: 'Measure longer inversion times, or take the plateau from a separate measurement.',
    test: context => compareWithT1(context, times => Math.max(...times), (ti, t1) => ({ isRaised: ti < 3 * t1, detail: `The longest TI is ${digits(ti / t1)} times T1.` })),
  },
  {
    id: 'lateStart', title: 'Shortest TI above T1', advice: 'Measure shorter inversion times.',
    test: context => compareWithT1(context, times => Math.min(...times), (ti, t1) => ({ isRaised: ti > t1, detail: `The shortest TI is ${digits(ti / t1)} times T1.` })),
  },
  {
    id: 'fewPoints', title: 'Fewer than five points', advice: 'Measure more inversion times.',
    test: context => ({ isRaised: usedOf(context).length < 5, detail: `${usedOf(context).length} points are used.` }),
  },
  {
    id: 'largeError', title: 'Standard error above 5 % of T1', advice: 'Look for outliers, or measure again with more signal.',
    test: ({ fit }) => {
      const t1 = t1Of(fit)
      if (!t1 || t1.se === null) return null
      return { isRaised: t1.se > 0.05 * t1.value, detail: `The standard error is ${percent(t1.se / t1.value)} of T1.` }
    },
  },
  {
    id: 'noInterval', title: 'No interval can be stated', advice: 'Leave the tube out, or measure it again: its T1 carries no error.',
    test: ({ fit }) => ({ isRaised: fit.noInterval !== null, detail: fit.noInterval?.message ?? 'The fit converged inside its bounds.' }),
  },
  {
    id: 'onBound', title: 'A parameter on a bound', advice: 'Check timing and model: a bound reached means the points do not fit them.',
    test: ({ fit }) => {
      const held = fit.parameters.filter(p => p.atBound)
      return { isRaised: held.length > 0, detail: held.length > 0 ? `${held.map(p => p.label).join(', ')} on a bound.` : 'All parameters lie inside their bounds.' }
    },
  },
  { id: 'outlier', title: 'Outlier', advice: 'Look at the point in the raw data; leave it out with a reason if it is faulty.', test: findOutliers },
  { id: 'runs', title: 'Residuals in runs', advice: 'The curve does not follow the points: check the timing model and, for magnitudes, the polarity.', test: testRuns },
  { id: 'weakSignal', title: 'Largest signal under 5 σ', advice: 'Measure again with more signal.', test: testSignal },
  { id: 'blankOutside', title: 'Blank outside the expected range', advice: 'Check temperature, aeration and contamination of the blank.', test: testBlank },
  {
    id: 'polarity', title: 'Polarity not settled', advice: 'Compare both T1; a point nearer to the null, or signed data, settles it.',
    test: ({ polarity, fit, alternative }) => {
      if (!polarity) return null
      const other = alternative ? t1Of(alternative)?.value : polarity.runnerUp?.t1_s
      const both = `T1 is ${digits(t1Of(fit)?.value ?? polarity.t1_s)} s${other === undefined ? '' : `, with the next best signs ${digits(other)} s`}`
      const ratio = polarity.runnerUp && polarity.rss > 0 ? `; residual sums of squares ${digits(polarity.runnerUp.rss / polarity.rss)} to 1` : ''
      return { isRaised: polarity.isAmbiguous, detail: `${both}${ratio}.` }
    },
  },
  {
    id: 'secondOpinion', title: 'A lower minimum exists', advice: 'Do not sign: report the tube, and fit it again from other start values.',
    test: ({ fit }) => fit.secondOpinion && {
      isRaised: !fit.secondOpinion.agrees, detail: fit.secondOpinion.agrees ? 'An independent program finds no lower minimum.' : 'An independent program finds a lower sum of squares.',
    },
  },
]

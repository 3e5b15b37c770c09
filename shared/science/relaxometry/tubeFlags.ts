import { tTwoSidedP } from '../statistics'
import { commonFlags, digits, testEvenOdd, usedOf, type Flag, type FlagFinding, type TubeContext } from './flags'

/** Compares the curve's time constant with a time of the acquisition; not applicable where it was held. */
function compareTimes(context: TubeContext, pick: (times: number[]) => number, judge: (time_s: number, constant_s: number, label: string) => FlagFinding): FlagFinding {
  const { curveTime_s, headline } = context
  return curveTime_s === null ? null : judge(pick(usedOf(context).map(i => context.x[i]!)), curveTime_s, headline?.label ?? 'T1')
}

const longest = (times: number[]): number => Math.max(...times)
const shortest = (times: number[]): number => Math.min(...times)

/** Sampling of a recovery along a time called TI or TR. */
function recoverySampling(time: 'TI' | 'TR', plural: string): Flag<TubeContext>[] {
  return [
    {
      id: 'shortSampling', title: `Longest ${time} under 3·T1`, advice: `Measure longer ${plural}, or take the plateau from a separate measurement.`,
      test: context => compareTimes(context, longest, (at, t1) => ({ isRaised: at < 3 * t1, detail: `The longest ${time} is ${digits(at / t1)} times T1.` })),
    },
    {
      id: 'lateStart', title: `Shortest ${time} above T1`, advice: `Measure shorter ${plural}.`,
      test: context => compareTimes(context, shortest, (at, t1) => ({ isRaised: at > t1, detail: `The shortest ${time} is ${digits(at / t1)} times T1.` })),
    },
  ]
}

const weakSignal: Flag<TubeContext> = {
  id: 'weakSignal', title: 'Largest signal under 5 σ', advice: 'Measure again with more signal.',
  test: (context) => {
    if (!context.noise) return null
    const { sigma_au, source } = context.noise
    const ratio = Math.max(...usedOf(context).map(i => Math.abs(context.signal_au[i]!))) / sigma_au
    return { isRaised: ratio < 5, detail: `The largest signal is ${digits(ratio)} times the noise (σ = ${digits(sigma_au)}, ${source}).` }
  },
}

const polarity: Flag<TubeContext> = {
  id: 'polarity', title: 'Polarity not settled', advice: 'Compare both T1; a point nearer to the null, or signed data, settles it.',
  test: ({ polarity: restored, headline, alternative }) => {
    if (!restored) return null
    const other = alternative?.parameters.find(one => one.name === 't1_s' || one.name === 't1Star_s')?.value ?? restored.runnerUp?.t1_s
    const both = `T1 is ${digits(headline?.value ?? restored.t1_s)} s${other === undefined ? '' : `, with the next best signs ${digits(other)} s`}`
    const ratio = restored.runnerUp && restored.rss > 0 ? `; residual sums of squares ${digits(restored.runnerUp.rss / restored.rss)} to 1` : ''
    return { isRaised: restored.isAmbiguous, detail: `${both}${ratio}.` }
  },
}

/** Flags of one inversion-recovery or Look–Locker tube. */
export const INVERSION_FLAGS: readonly Flag<TubeContext>[] = [
  ...recoverySampling('TI', 'inversion times'), ...commonFlags({ more: 'inversion times', expected: 'rises' }), weakSignal, polarity,
]

/** Flags of one saturation-recovery tube. */
export const SATURATION_FLAGS: readonly Flag<TubeContext>[] = [
  ...recoverySampling('TR', 'recovery times'), ...commonFlags({ more: 'recovery times', expected: 'rises' }), weakSignal,
]

/** Flags of one tube measured at several flip angles. The signal must rise to its top and fall again, or it does not tell M0 from T1. */
export const FLIP_FLAGS: readonly Flag<TubeContext>[] = [
  {
    id: 'oneSided', title: 'Flip angles on one side of the top', advice: 'Measure angles below and above the one of largest signal (Ernst\'s angle).',
    test: (context) => {
      const order = usedOf(context).sort((i, j) => context.x[i]! - context.x[j]!)
      const top = order.reduce((best, i, k) => context.fit.fitted[i]! > context.fit.fitted[order[best]!]! ? k : best, 0)
      return { isRaised: top === 0 || top === order.length - 1, detail: `The largest signal stands at angle ${top + 1} of ${order.length}.` }
    },
  },
  ...commonFlags({ more: 'flip angles', expected: null }), weakSignal,
]

function testLastEcho(context: TubeContext): FlagFinding {
  if (!context.noise) return null
  const { sigma_au, source } = context.noise
  const last = usedOf(context).reduce((at, i) => context.x[i]! > context.x[at]! ? i : at)
  const ratio = Math.abs(context.fit.fitted[last]!) / sigma_au
  return { isRaised: ratio < 5, detail: `The curve at the last echo used is ${digits(ratio)} times the noise (σ = ${digits(sigma_au)}, ${source}).` }
}

/** An offset above zero that the echoes can tell from none: magnitudes do not decay to zero but to the noise. */
function testLevel({ withOffset }: TubeContext): FlagFinding {
  const c = withOffset?.parameters.find(one => one.name === 'c_au')
  if (!withOffset || c === undefined || c.se === null || !(c.se > 0)) return null
  const p = tTwoSidedP(c.value / c.se, withOffset.dof)
  return { isRaised: c.value > 0 && p < 0.01, detail: `With an offset the decay ends at ${digits(c.value)} ± ${digits(c.se)}, p ${p < 0.001 ? 'below 0.001' : `= ${digits(p)}`}.` }
}

const FLOOR_ADVICE = 'Fit with the noise-floor model, or leave the late echoes out with a reason: magnitudes in noise read too high, and T2 with them.'

/** Flags of one multi-echo tube. */
export const ECHO_FLAGS: readonly Flag<TubeContext>[] = [
  {
    id: 'shortTrain', title: 'Last echo before 1.5·T2', advice: 'Measure later echoes.',
    test: context => compareTimes(context, longest, (at, t2) => ({ isRaised: at < 1.5 * t2, detail: `The last echo stands at ${digits(at / t2)} times T2.` })),
  },
  {
    id: 'lateFirstEcho', title: 'First echo after T2', advice: 'Measure earlier echoes, or a shorter echo spacing.',
    test: context => compareTimes(context, shortest, (at, t2) => ({ isRaised: at > t2, detail: `The first echo stands at ${digits(at / t2)} times T2.` })),
  },
  ...commonFlags({ more: 'echoes', expected: 'falls' }),
  { id: 'evenOdd', title: 'Even and odd echoes differ', advice: 'Refocusing is imperfect: leave out the first echoes, use the even ones, or calibrate the refocusing pulse.', test: testEvenOdd },
  { id: 'weakEcho', title: 'Last echo under 5 σ', advice: FLOOR_ADVICE, test: testLastEcho },
  { id: 'levelsOff', title: 'Decay levels off above zero', advice: FLOOR_ADVICE, test: testLevel },
]

import type { NamedQuantity } from '../../evidence/quantity'
import type { RateValue } from '../../science/kinetics/firstOrder'
import { correctDecay, fitTimeCourse, type TimeCourse, type TimeCourseFlag, type TimePoint } from '../../science/kinetics/timeCourse'
import { solveWeighted, type KineticsRefusal } from '../../science/kinetics/weightedLinear'
import { columnOf } from '../relaxation/noise'
import { studentise } from '../../science/least-squares/covariance'
import { leftOutOf } from '../relaxation/exclusions'
import { curveOver } from '../relaxation/tubeResult'
import type { AnalysisInput, Conditions, FitStatistics, Flag, SeriesTube, TubeResult } from '../types'

const FLAGS: Readonly<Record<TimeCourseFlag, { title: string, sentence: string }>> = {
  initialRate: { title: 'Initial rate only', sentence: 'Less than a tenth has reacted: the rate is that of a straight line between the stated ends and reads a few per cent low. Follow it longer where you can.' },
  runs: { title: 'Residuals run together', sentence: 'Residuals of one sign follow each other: the course is not one exponential within its noise. Look for drift, evaporation, or a second process.' },
  secondExponential: { title: 'A second exponential', sentence: 'Two exponentials describe the course better (F test, 1 %). Look for a second species or a change of the solution, and fit the part that is the dissociation.' },
  endExtrapolated: { title: 'End extrapolated', sentence: 'The course stops before two lifetimes and its end is fitted: rate and end trade off. Follow it longer, or give the end value.' },
}

export const named = (base: Pick<NamedQuantity, 'name' | 'label' | 'unit'>, { value, kind, se, interval }: RateValue): NamedQuantity =>
  ({ ...base, value, kind, se, interval: interval && [interval[0], interval[1]], evidenceId: null })
export const given = (name: string, label: string, unit: string, value: number): NamedQuantity => ({ name, label, unit, value, kind: '=', se: null, interval: null, evidenceId: null })

/** A half-life in the unit that reads best. */
export function namedHalfLife(half_s: RateValue): NamedQuantity {
  const [unit, size] = half_s.value < 120 ? ['s', 1] as const : half_s.value < 7200 ? ['min', 60] as const : ['h', 3600] as const
  const scaled = { ...half_s, value: half_s.value / size, se: half_s.se === null ? null : half_s.se / size, interval: half_s.interval === null ? null : [half_s.interval[0] / size, half_s.interval[1] / size] as const }
  return named({ name: `halfLife_${unit}`, label: 't_{1/2}', unit }, scaled)
}

const numberOr = (value: unknown): number | null => (typeof value === 'number' ? value : null)
const first = (tube: SeriesTube, field: string): number | null => columnOf(tube, field)?.find(value => value !== null) ?? null

/** Known ends of a course: its own, else those of all flasks. */
export const endsOf = (tube: SeriesTube, conditions: Conditions) => ({ end: first(tube, 'end_au') ?? numberOr(conditions.end_au), start: first(tube, 'start_au') ?? numberOr(conditions.start_au) })

export function timePoints(tube: SeriesTube): TimePoint[] {
  const [time, signal, sigma] = ['time_s', 'signal_au', 'signalSd_au'].map(field => columnOf(tube, field))
  return (time ?? []).map((t, i) => ({ time_s: t ?? NaN, signal: signal?.[i] ?? NaN, sigma: sigma?.[i] ?? null }))
}

/** One exponential through every course. */
export function fitCourses(input: AnalysisInput): TubeResult[] {
  return input.tubes.map(tube => fitCourse(tube, input))
}

function fitCourse(tube: SeriesTube, { conditions, exclusions }: AnalysisInput): TubeResult {
  const left = leftOutOf(tube, exclusions)
  const raw = timePoints(tube)
  const nuclide = numberOr(conditions.nuclideHalfLife_s)
  const corrected = nuclide === null ? raw : correctDecay(raw, nuclide, 0)
  const points = 'ok' in corrected ? raw : corrected
  const used = points.map((_, index) => index).filter(index => !left.points.has(index))
  const fit = 'ok' in corrected ? corrected : tube.role === 'blank' ? NOT_A_COURSE : fitTimeCourse(used.map(index => points[index]!), endsOf(tube, conditions))
  const studentised = fit.ok ? studentisedOf(used.map(index => points[index]!), fit) : []
  const at = (index: number) => used.indexOf(index)
  const shown = points.map(({ time_s, signal }, index) => {
    const fitted = fit.ok ? valueAt(fit, time_s) : null
    return { index, x: time_s, y: signal, fitted, residual: fitted === null ? null : signal - fitted, studentised: studentised[at(index)] ?? null, excluded: left.points.get(index) ?? null }
  })
  const base = { tubeNo: tube.tubeNo, label: tube.label, role: tube.role, conc_mM: tube.conc_mM, excluded: left.tube, points: shown, secondOpinion: null }
  if (!fit.ok) return { ...base, headline: null, parameters: [], refusal: refusalOf(fit), curve: [], flags: [], passed: [], statistics: null }
  const headline = named({ name: 'kObs_per_s', label: 'k_{obs}', unit: 's^-1' }, fit.rate_per_s)
  return {
    ...base, headline, refusal: null, parameters: [headline, namedHalfLife(fit.halfLife_s), given('start_au', 'Start', '', fit.start), given('end_au', 'End', '', fit.end)],
    curve: curveOver(points.map(point => point.time_s), t => valueAt(fit, t)), flags: flagsOf(fit, tube.tubeNo), passed: passedOf(fit), statistics: statisticsOf(fit, used.map(index => points[index]!)),
    intervalMethod: `about ln k, Student t, ${fit.dof} degrees of freedom`,
  }
}

const NOT_A_COURSE: KineticsRefusal = { ok: false, reason: 'blank', message: 'A blank is not fitted.', accepted: 'the role sample, if there is complex in it' }

const refusalOf = ({ reason, message, accepted }: KineticsRefusal) => ({ reason, message, accepted })

function valueAt(fit: TimeCourse, time_s: number): number {
  const span = fit.start - fit.end
  return fit.form === 'exponential' ? fit.end + span * Math.exp(-fit.rate_per_s.value * time_s) : (fit.intercept ?? fit.start) - span * fit.rate_per_s.value * time_s
}

/** Externally studentised residuals by the linearised fit. */
function studentisedOf(points: readonly TimePoint[], fit: TimeCourse): (number | null)[] {
  const k = fit.rate_per_s.value
  const decay = points.map(p => Math.exp(-k * p.time_s))
  const span = fit.start - fit.end
  const shape = fit.form === 'initialRate' ? [points.map(() => 1), points.map(p => p.time_s)] : [...(fit.freeEnd ? [points.map(() => 1)] : []), decay, points.map((p, i) => -span * p.time_s * decay[i]!)]
  const sigma = points.map(p => p.sigma ?? 1)
  const covariance = solveWeighted(shape, points.map(() => 0), sigma)?.covariance
  if (covariance === undefined) return points.map(() => null)
  const leverage = points.map((_, i) => shape.reduce((sum, a, p) => sum + shape.reduce((inner, b, q) => inner + a[i]! * covariance[p]![q]! * b[i]!, 0), 0) / sigma[i]! ** 2)
  return studentise(fit.residuals.map((r, i) => r / sigma[i]!), leverage, fit.dof)
}

const flagsOf = (fit: TimeCourse, tubeNo: number): Flag[] => fit.flags.map(id => ({ id, ...FLAGS[id], tubeNo }))

function passedOf(fit: TimeCourse): string[] {
  const p = (value: number): string => `p = ${Number(value.toPrecision(2))}`
  return [
    ...(fit.pRuns !== null && !fit.flags.includes('runs') ? [`Residuals run together: no (${p(fit.pRuns)}).`] : []),
    ...(fit.pSecondExponential !== null && !fit.flags.includes('secondExponential') ? [`A second exponential: no (${p(fit.pSecondExponential)}).`] : []),
  ]
}

function statisticsOf(fit: TimeCourse, points: readonly TimePoint[]): FitStatistics {
  const known = points.every(p => p.sigma !== null)
  const mean = points.reduce((sum, p) => sum + p.signal, 0) / points.length
  const total = points.reduce((sum, p) => sum + (p.signal - mean) ** 2, 0)
  const rss = fit.residuals.reduce((sum, r) => sum + r * r, 0)
  return {
    rss, dof: fit.dof, reducedChi2: known ? fit.chi2 / fit.dof : null, aicc: null, r2: total > 0 ? 1 - rss / total : null, condition: null, evaluations: fit.evaluations,
    stop: fit.form === 'exponential' ? 'least sum over ln k (grid, then golden section)' : 'closed form (straight line)',
    sigma: known ? 'given with the points' : `from the scatter about this fit, ${fit.dof} degrees of freedom`,
  }
}

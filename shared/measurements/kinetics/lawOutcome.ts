import type { EvidenceDraft } from '../../evidence/types'
import type { KineticsRefusal } from '../../science/kinetics/weightedLinear'
import type { AnalysisInput, AnalysisOutcome, Conditions, Flag, TubeResult } from '../types'
import { solutionEvidence } from './conditions'
import { flaskOf, flaskPH } from './flask'
import { halfLifeSeries } from './halfLifeSeries'
import { ENTHALPY, fitSumLaw, STATISTIC, type LawDone, type LawModel } from './lawSeries'
import { fitSaturationLaw } from './saturationSeries'
import { distinct, withEqualErrors, type SeriesRate } from './seriesRates'

/** Models of a series of rates. */
export const LAW_MODELS = [
  { id: 'rateLawSum', version: 1, title: 'Rate law: k_0, and a term for acid and for each metal that was varied' },
  { id: 'rateLawSumSecond', version: 1, title: 'Rate law with a second proton, k_2[H]²' },
  { id: 'rateLawSumMixed', version: 1, title: 'Rate law with terms of metal and proton together' },
  { id: 'rateLawSaturation', version: 1, title: 'Rate law that levels off, with acid or with one metal' },
  { id: 'halfLifeOneAcid', version: 1, title: 'Half-life in one strong acid' },
] as const

interface Parts {
  input: AnalysisInput
  tubes: TubeResult[]
  rates: readonly SeriesRate[]
  method: (done: LawDone) => string
  flags: readonly Flag[]
}

/** The law of a series of rates, or the half-life where all stand in one acid; refused by value with the courses as they are. */
export function lawOutcome({ input, tubes, rates, method, flags }: Parts): AnalysisOutcome {
  const counting = rates.filter(rate => rate.excluded === null)
  const refused = (refusal: Pick<KineticsRefusal, 'reason' | 'message' | 'accepted'>): AnalysisOutcome => ({ ok: false, reason: refusal.reason, message: refusal.message, accepted: refusal.accepted, tubes })
  if (counting.length === 0) return refused({ reason: 'noRates', message: 'No flask gives a rate.', accepted: 'one course or more that decays, not left out' })
  const done = fitBy(input.modelId, withEqualErrors(rates), tubes)
  if (!done.ok) return refused(done)
  return { ok: true, tubes, series: done.series, flags: [...done.flags, ...solutionFlags(input.conditions, done), ...flags], passed: [], method: method(done) }
}

function fitBy(modelId: string, rates: readonly SeriesRate[], tubes: readonly TubeResult[]): LawDone | KineticsRefusal {
  const counting = rates.filter(rate => rate.excluded === null)
  if (modelId === 'halfLifeOneAcid') return halfLifeSeries(rates, tubes)
  if (modelId === 'rateLawSaturation') return fitSaturationLaw(rates)
  return distinct(counting) === 1 ? halfLifeSeries(rates, tubes) : fitSumLaw(rates, modelId as LawModel)
}

function solutionFlags({ pHScale, acidKind }: Conditions, { used, names }: LawDone): Flag[] {
  const flag = (id: string, title: string, sentence: string): Flag => ({ id, title, sentence, tubeNo: null })
  const byPH = used.some(rate => rate.flask.acid_M === null)
  return [
    ...(byPH && pHScale === 'activity' ? [flag('activityPH', 'pH is an activity', 'The law takes pH for −log[H]; at 0.15 M an electrode reads about 0.1 apart, which moves k_1 by about a quarter. Give concentrations where you have them.')] : []),
    ...(names.includes('halfLifeAcid_s') && (acidKind ?? null) === null ? [flag('acidNotNamed', 'The acid is not named', 'Half-lives compare in one acid only: say which acid it was.')] : []),
  ]
}

/** What a series says of its complex: the constants of its law with their bounds, or its half-life in acid, as the typed records say it. */
export function lawEvidence(outcome: Extract<AnalysisOutcome, { ok: true }>, input: AnalysisInput): EvidenceDraft[] {
  const { parameters, statistics, correlation, points } = outcome.series
  const stated = (label: string): number | null => statistics.find(one => one.label === label)?.value ?? null
  const base = { ...solutionEvidence(input.conditions), temperature_K: stated(STATISTIC.temperature) }
  const counted = points.filter(point => point.excluded === null)
  const enthalpy = parameters.find(one => one.name === ENTHALPY) ?? null
  const detailOfAll = { nRates: counted.length, nRatesLeftOut: points.length - counted.length }
  const draft = (name: string, conditions: Conditions, detail: EvidenceDraft['detail']): EvidenceDraft[] => parameters.filter(one => one.name === name)
    .map(({ value, kind, se, interval, unit }) => ({ quantity: name, value: { value, kind, se, interval, unit }, conditions, covarianceGroup: null, detail: { ...detail, ...detailOfAll } }))
  const half = parameters.find(one => one.name === 'halfLifeAcid_s')
  if (half) return draft('halfLifeAcid_s', { ...base, ...acidOf(input, counted[0]?.tubeNo ?? null) }, { enthalpy_kJ_per_mol: enthalpy?.value ?? null, enthalpy_se_kJ_per_mol: enthalpy?.se ?? null })
  const form = input.modelId === 'rateLawSaturation' ? 'saturation' : 'sum'
  const [pHMin, pHMax] = [stated(STATISTIC.lowPH), stated(STATISTIC.highPH)]
  const [i, j] = ['k0_per_s', 'k1_per_M_s'].map(name => correlation?.names.indexOf(name) ?? -1) as [number, number]
  const detail = {
    form, pHMin, pHMax, metal: statistics.find(one => one.label === 'Metal of the law')?.text ?? null, enthalpy_kJ_per_mol: enthalpy?.value ?? null, enthalpy_se_kJ_per_mol: enthalpy?.se ?? null,
    correlation_k0_k1: i >= 0 && j >= 0 ? correlation!.matrix[i]![j]! : null,
  }
  return parameters.filter(one => one.name !== ENTHALPY).flatMap(({ name }) => draft(name, { ...base, pHMin, pHMax }, detail))
}

function acidOf({ tubes, conditions }: AnalysisInput, tubeNo: number | null): Conditions {
  const tube = tubes.find(one => one.tubeNo === tubeNo)
  const flask = tube ? flaskOf(tube, conditions, tube.points.columns[0] === 'rate_per_s' ? 0 : null) : null
  const pH = flask && flaskPH(flask)
  const acid = conditions.acidKind ?? null
  return { ...(pH === null ? {} : { acid_M: Number((flask?.acid_M ?? 10 ** -pH).toPrecision(12)) }), ...(acid === null ? {} : { acid }) }
}

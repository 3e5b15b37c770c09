import type { FitDone } from '../../science/least-squares/outcome'
import type { FitData } from '../../science/least-squares/fitModel'
import { findModel } from '../../science/models'
import type { Model, Settings } from '../../science/models/define'
import { BLANK_RANGES, findBlankRanges, type BlankRange } from '../../science/relaxometry/blankRanges'
import { reportFlags, TUBE_FLAGS } from '../../science/relaxometry/flags'
import type { RecoveryFit } from '../../science/relaxometry/polarity'
import { fitTubes, type PooledNoise } from '../../science/relaxometry/tubes'
import type { AnalysisInput, Conditions, SeriesTube, TubeResult } from '../types'
import { leftOutOf, type LeftOut } from './exclusions'
import { signalsOf, tisOf } from './recoveryForm'
import { analysedPoints, curveOver, namedParameter, passedText, rateOf, secondOpinionOf, statisticsOf } from './tubeResult'

/** The recovery model that a timing calls for. */
export function recoveryModelFor(conditions: Conditions): string {
  if (conditions.timing === 'inversionToInversion') return 'inversionRecoveryTiRepeat'
  return conditions.timing === 'constantDelay' ? 'inversionRecoveryDelay' : 'inversionRecovery3'
}

/** Settings of the acquisition that the model asks for, as far as the conditions hold them. */
export function recoverySettings(model: Model, conditions: Conditions): Settings {
  const known: Readonly<Record<string, number | string | null | undefined>> = { tr_s: conditions.tr_s, td_s: conditions.td_s, theta_rad: conditions.inversionAngle_rad }
  return Object.fromEntries(Object.keys(model.settings).flatMap((name) => {
    const value = known[name]
    return typeof value === 'number' ? [[name, value] as const] : []
  }))
}

interface Prepared { tube: SeriesTube, left: LeftOut, data: FitData, noiseSource: string | null }

/**
 * Fits T1 of every tube. Tubes that are left out are fitted on their own, so that they can be shown at their place and change nothing elsewhere.
 * @throws Error for a model that is not registered
 */
export function fitRecoveryTubes(input: AnalysisInput): TubeResult[] {
  const model = findModel(input.modelId)
  if (model === null) throw new Error(`No model is called ${input.modelId}.`)
  const settings = recoverySettings(model, input.conditions)
  const signal = input.conditions.signalForm === 'magnitude' ? 'magnitude' : 'signed'
  const prepared = input.tubes.map(tube => prepare(tube, input))
  const results = new Map<number, TubeResult>()
  const ranges = findBlankRanges(BLANK_RANGES, blankConditions(input.conditions))
  for (const group of [prepared.filter(one => one.left.tube === null), ...prepared.filter(one => one.left.tube !== null).map(one => [one])]) {
    const fits = fitTubes(model, group.map(one => one.data), signal, { settings, secondOpinion: true })
    group.forEach((one, k) => {
      const recovery = fits.tubes[k]
      if (recovery) results.set(one.tube.tubeNo, tubeResult({ one, recovery, pool: fits.pools[k] ?? null, model, settings, ranges }))
    })
  }
  return input.tubes.flatMap(tube => results.get(tube.tubeNo) ?? [])
}

function prepare(tube: SeriesTube, { exclusions, conditions }: AnalysisInput): Prepared {
  const left = leftOutOf(tube, exclusions)
  const { sigma, source } = sigmaOf(tube, conditions)
  return { tube, left, data: { x: tisOf(tube), y: signalsOf(tube), sigma, exclude: [...left.points.keys()].sort((a, b) => a - b) }, noiseSource: source }
}

/** Standard deviations: of each point where every one has its own, else the noise measured, else none. */
function sigmaOf(tube: SeriesTube, { noiseSigma_au }: Conditions): { sigma: number | number[] | null, source: string | null } {
  const at = tube.points.columns.indexOf('signalSd_au')
  const own = at < 0 ? [] : tube.points.rows.flatMap(row => row[at] ?? [])
  if (own.length > 0 && own.length === tube.points.rows.length) return { sigma: own, source: 'given with each point' }
  return typeof noiseSigma_au === 'number' ? { sigma: noiseSigma_au, source: 'measured noise' } : { sigma: null, source: null }
}

function blankConditions({ medium, aeration, temperature_K, b0_T }: Conditions) {
  return {
    medium: typeof medium === 'string' ? medium : null, aeration: aeration === 'degassed' || aeration === 'airSaturated' ? aeration : null,
    temperature_K: typeof temperature_K === 'number' ? temperature_K : null, b0_T: typeof b0_T === 'number' ? b0_T : null,
  } as const
}

interface Parts { one: Prepared, recovery: RecoveryFit, pool: PooledNoise | null, model: Model, settings: Settings, ranges: readonly BlankRange[] }

function tubeResult(parts: Parts): TubeResult {
  const { one: { tube, left, data }, recovery: { fit, polarity } } = parts
  const base = { tubeNo: tube.tubeNo, label: tube.label, role: tube.role, conc_mM: tube.conc_mM, excluded: left.tube }
  const signal = polarity?.signal ?? data.y
  if (!fit.ok) {
    return {
      ...base, headline: null, parameters: [], refusal: { reason: fit.reason, message: fit.message, accepted: fit.accepted },
      points: analysedPoints(data.x, signal, null, left.points), curve: [], flags: [], passed: [], statistics: null, secondOpinion: null,
    }
  }
  const named = fit.parameters.map(namedParameter)
  const t1 = named.find(parameter => parameter.name === 't1_s') ?? null
  return {
    ...base, headline: t1, parameters: t1 === null ? named : [...named, rateOf(t1, 'rate1_per_s', 'R_1')], refusal: null, points: analysedPoints(data.x, signal, fit, left.points),
    curve: curveOf(fit, parts), ...flagsOf(fit, signal, parts), statistics: statisticsOf(fit), secondOpinion: secondOpinionOf(fit),
  }
}

function curveOf(fit: FitDone, { model, settings, one }: Parts): TubeResult['curve'] {
  const values = { ...fit.fixed, ...Object.fromEntries(fit.parameters.map(parameter => [parameter.name, parameter.value])) }
  return curveOver(one.data.x, ti_s => model.evaluate(ti_s, values, settings))
}

function flagsOf(fit: FitDone, signal_au: readonly number[], { one: { tube, data, noiseSource }, recovery, pool, ranges }: Parts): Pick<TubeResult, 'flags' | 'passed'> {
  const size = noiseSize(fit, data)
  const source = noiseSource ?? (pool ? 'pooled over the tubes' : 'from the scatter about the fit')
  const reports = reportFlags(TUBE_FLAGS, {
    fit, ti_s: data.x, signal_au, polarity: recovery.polarity, alternative: recovery.alternative?.ok ? recovery.alternative : null,
    noise: size === null ? null : { sigma_au: size, source }, blankRanges: ranges, isBlank: tube.role === 'blank',
  })
  const raised = reports.filter(report => report.state === 'raised')
  return {
    flags: raised.map(({ id, title, detail, advice }) => ({ id, title, sentence: [detail, advice].filter(Boolean).join(' '), tubeNo: tube.tubeNo })),
    passed: reports.filter(report => report.state === 'passed').map(({ title, detail }) => passedText(title, detail)),
  }
}

/** Size of the noise: the largest of the standard deviations given, or that of the fit; null where neither is above 0. */
function noiseSize(fit: FitDone, { sigma }: FitData): number | null {
  if (typeof sigma === 'number') return sigma
  if (sigma) return Math.max(...sigma)
  return fit.sigma !== null && fit.sigma > 0 ? fit.sigma : null
}

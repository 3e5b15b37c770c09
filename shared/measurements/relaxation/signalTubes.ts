import type { NamedQuantity } from '../../evidence/quantity'
import { derivedOf, parameterVector } from '../../science/least-squares/derived'
import { fitModel, type FitData, type FitOptions } from '../../science/least-squares/fitModel'
import type { FitDone } from '../../science/least-squares/outcome'
import { findModel } from '../../science/models'
import { withStandards, type Model, type Settings } from '../../science/models/define'
import { BLANK_RANGES, findBlankRanges, type BlankRange } from '../../science/relaxometry/blankRanges'
import { reportFlags, type Flag, type TubeContext } from '../../science/relaxometry/flags'
import type { RecoveryFit } from '../../science/relaxometry/polarity'
import { fitTubes, type PooledNoise, type SignalForm } from '../../science/relaxometry/tubes'
import type { AnalysisInput, Conditions, CorrelationTable, SeriesTube, TubeResult } from '../types'
import { leftOutOf, type LeftOut } from './exclusions'
import { withIntervals } from './intervals'
import { columnOf, noiseOf, pixelSigma, pointNoise } from './noise'
import { optionOf } from '../fitOptions'
import { INTERVAL_OPTION } from './options'
import { analysedPoints, curveOver, inNotation, namedParameter, passedText, rateOf, secondOpinionOf, statisticsOf } from './tubeResult'

/** What tells one kind of signal series from another when its tubes are fitted. */
export interface SignalKind {
  /** Fields of the points: abscissa and, in order of preference, signal. */
  x: string
  y: readonly string[]
  /** Name of the relaxation time reported, and of the rate that the line takes. */
  time: string
  rate: { name: string, label: string }
  flags: readonly Flag<TubeContext>[]
  /** Whether the blank is held against the record of its medium. */
  knowsBlank: boolean
  /** Numbers of the acquisition that the model asks for, of this tube. */
  settings: (model: Model, tube: SeriesTube, conditions: Conditions) => Settings
  signal: (model: Model, conditions: Conditions) => SignalForm
  /** Parameters held at a measured value. */
  fixed?: (model: Model, input: AnalysisInput) => Readonly<Record<string, number>> | undefined
  /** Points of a tube that the options leave out, with the reason. */
  skipped?: (tube: SeriesTube, input: AnalysisInput) => ReadonlyMap<number, string>
  /** Model of the same decay with an offset, fitted beside to see whether it levels off. */
  offsetModel?: (model: Model) => Model | null
}

interface Prepared { tube: SeriesTube, left: LeftOut, data: FitData, noiseSource: string | null, options: FitOptions }
interface Parts { one: Prepared, recovery: RecoveryFit, pool: PooledNoise | null, model: Model, kind: SignalKind, input: AnalysisInput, ranges: readonly BlankRange[] }

/**
 * Fits every tube of a series of signals. Reference tubes and tubes that are left out are fitted on their own, so that they can be shown at their place and change nothing elsewhere.
 * @param secondOpinion whether another program is asked about each tube; off only where its time is measured apart
 * @throws Error for a model that is not registered
 */
export function fitSignalTubes(input: AnalysisInput, kind: SignalKind, { secondOpinion = true }: { secondOpinion?: boolean } = {}): TubeResult[] {
  const model = findModel(input.modelId)
  if (model === null) throw new Error(`No model is called ${input.modelId}.`)
  const prepared = input.tubes.map(tube => prepare(tube, model, kind, input))
  const results = new Map<number, TubeResult>()
  const ranges = kind.knowsBlank ? findBlankRanges(BLANK_RANGES, blankConditions(input.conditions)) : []
  const isApart = (one: Prepared) => one.left.tube !== null || one.tube.role === 'reference'
  for (const group of [prepared.filter(one => !isApart(one)), ...prepared.filter(isApart).map(one => [one])]) {
    const fits = fitTubes(model, group.map(one => one.data), kind.signal(model, input.conditions), { secondOpinion }, k => group[k]?.options ?? {})
    group.forEach((one, k) => {
      const recovery = fits.tubes[k]
      if (recovery) results.set(one.tube.tubeNo, tubeResult({ one, recovery, pool: fits.pools[k] ?? null, model, kind, input, ranges }))
    })
  }
  return input.tubes.flatMap(tube => results.get(tube.tubeNo) ?? [])
}

function prepare(tube: SeriesTube, model: Model, kind: SignalKind, input: AnalysisInput): Prepared {
  const left = leftOutOf(tube, input.exclusions)
  const skipped = kind.skipped?.(tube, input)
  const points = skipped === undefined ? left.points : new Map([...skipped, ...left.points])
  const { sigma, source } = pointNoise(tube, input.conditions)
  const fixed = kind.fixed?.(model, input)
  return {
    tube, left: { ...left, points }, noiseSource: source,
    data: { x: numbers(columnOf(tube, kind.x)), y: numbers(kind.y.map(field => columnOf(tube, field)).find(column => column !== null) ?? null), sigma, exclude: [...points.keys()].sort((a, b) => a - b) },
    options: { settings: kind.settings(model, tube, input.conditions), ...(fixed === undefined ? {} : { fixed }) },
  }
}

const numbers = (column: (number | null)[] | null): number[] => (column ?? []).map(value => value ?? Number.NaN)

function blankConditions({ medium, aeration, temperature_K, b0_T }: Conditions) {
  return {
    medium: typeof medium === 'string' ? medium : null, aeration: aeration === 'degassed' || aeration === 'airSaturated' ? aeration : null,
    temperature_K: typeof temperature_K === 'number' ? temperature_K : null, b0_T: typeof b0_T === 'number' ? b0_T : null,
  } as const
}

function tubeResult(parts: Parts): TubeResult {
  const { one: { tube, left, data, options }, recovery: { fit, polarity, relativeSigma = null }, model, kind, input } = parts
  const base = { tubeNo: tube.tubeNo, label: tube.label, role: tube.role, conc_mM: tube.conc_mM, excluded: left.tube }
  const signal = polarity?.signal ?? data.y
  if (!fit.ok) {
    return {
      ...base, headline: null, parameters: [], refusal: { reason: fit.reason, message: fit.message, accepted: fit.accepted },
      points: analysedPoints(data.x, signal, null, left.points), curve: [], flags: [], passed: [], statistics: null, secondOpinion: null,
    }
  }
  const fitted = [...derivedOf(model, fit), ...fit.parameters]
  const { parameters, words } = withIntervals(fitted.map(namedParameter), {
    model, data: { ...data, y: signal, sigma: relativeSigma ?? data.sigma }, fit, options: relativeSigma ? { ...options, relativeSigma: true } : options, choice: String(optionOf(input, INTERVAL_OPTION)), seed: `${input.seed}/${tube.tubeNo}`,
  })
  const time = parameters.find(parameter => parameter.name === kind.time) ?? null
  return {
    ...base, headline: time, parameters: time === null ? parameters : [...parameters, rateOf(time, kind.rate.name, kind.rate.label)], refusal: null,
    points: analysedPoints(data.x, signal, fit, left.points), curve: curveOf(fit, parts), ...flagsOf(fit, signal, time, parts), statistics: statisticsOf(fit),
    secondOpinion: secondOpinionOf(fit), correlation: correlationOf(fit), intervalMethod: words,
  }
}

function correlationOf({ parameters, correlation }: FitDone): CorrelationTable | null {
  return correlation && { names: parameters.map(one => one.name), labels: parameters.map(one => inNotation(one.label)), matrix: correlation.map(row => [...row]) }
}

function curveOf(fit: FitDone, { model, one }: Parts): TubeResult['curve'] {
  const p = parameterVector(model, fit)
  const settings = withStandards(model.settings, one.options.settings ?? {})
  const gradient = new Float64Array(model.names.length)
  return curveOver(one.data.x, x => model.valueAndGradient(x, p, settings, gradient))
}

function flagsOf(fit: FitDone, signal_au: readonly number[], time: NamedQuantity | null, { one, recovery, pool, ranges, kind, model, input }: Parts): Pick<TubeResult, 'flags' | 'passed'> {
  const { tube, data, noiseSource, options } = one
  const other = kind.offsetModel?.(model) ?? null
  const beside = other === null ? null : fitModel(other, data, options)
  const constant = model.separable?.nonlinear ?? kind.time
  const reports = reportFlags(kind.flags, {
    fit, x: data.x, signal_au, headline: time, curveTime_s: fit.parameters.find(parameter => parameter.name === constant)?.value ?? time?.value ?? null, polarity: recovery.polarity,
    alternative: recovery.alternative?.ok ? recovery.alternative : null, withOffset: beside?.ok ? beside : null,
    noise: noiseOf(fit, data, { source: noiseSource, isPooled: pool !== null, pixel_au: pixelSigma(input.conditions) }), blankRanges: ranges, isBlank: tube.role === 'blank',
  })
  return {
    flags: reports.filter(report => report.state === 'raised').map(({ id, title, detail, advice }) => ({ id, title, sentence: [detail, advice].filter(Boolean).join(' '), tubeNo: tube.tubeNo })),
    passed: reports.filter(report => report.state === 'passed').map(({ title, detail }) => passedText(title, detail)),
  }
}

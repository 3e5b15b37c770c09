import { describeConditions } from './conditions'
import { checkExclusions } from './exclusions'
import { seriesFigureOf, tubeFigureOf, type FigureWords } from './figures'
import { conditionsText, engineText, intervalText, leftOutText, noiseText, samplingText, slopeText, tubesText } from './methodText'
import { INTERVAL_OPTION, LINE_OPTION } from './options'
import { sdFlags } from './recoveryFlags'
import { relaxivityEvidence, seriesOutcome } from './seriesOutcome'
import { fitSignalTubes, type SignalKind } from './signalTubes'
import { findModel } from '../../science/models'
import type { AnalysisInput, Flag, MeasurementKind, TubeResult } from '../types'

interface SignalSpec extends Pick<MeasurementKind, 'kind' | 'version' | 'title' | 'purpose' | 'columns' | 'conditions' | 'templates' | 'defaultModel' | 'checkTubes' | 'propose'> {
  digit: '1' | '2'
  models: readonly { id: string, within?: readonly string[] }[]
  /** Options besides the interval. */
  options?: MeasurementKind['options']
  words: FigureWords
  signals: SignalKind
  /** Flags of the series that come from its conditions. */
  flags?: (input: AnalysisInput) => Flag[]
  /** 'inversion recovery' and what else of the sequence belongs into the sentence. */
  sequenceText: (input: AnalysisInput) => string
  /** What was done to the signals, after the sampling: 'signed signals'. */
  formText?: (input: AnalysisInput) => string
  /** 'inversion times', with the unit that they are told in. */
  sampling: { plural: string, unit: string, per: number }
}

/** A kind whose tubes are signals along one abscissa and whose series is a relaxivity: all that such kinds share, from one declaration. */
export function signalKind({ digit, models, options = [], words, signals, flags, sequenceText, formText, sampling, ...kind }: SignalSpec): MeasurementKind {
  const method = (input: AnalysisInput, used: readonly TubeResult[]): string => {
    const model = findModel(input.modelId)
    return `T${digit} of ${tubesText(used)}, was measured by ${sequenceText(input)}${conditionsText(input.conditions)} (${samplingText(used, sampling)}${formText ? `; ${formText(input)}` : ''}) and fitted with ${model?.equation ?? input.modelId}`
      + `${model ? ` (${model.source})` : ''}. ${noiseText(used)}${intervalText(used)}${slopeText(digit, used, input)}${leftOutText(input)}${engineText()}`
  }
  return {
    ...kind,
    layouts: ['columnPerTube', 'long', 'rowPerTube'],
    models: models.map(({ id, within = [] }) => {
      const model = findModel(id)
      if (model === null) throw new Error(`No model is called ${id}.`)
      return { id, version: model.version, title: model.title, within }
    }),
    options: [INTERVAL_OPTION, ...options, LINE_OPTION],
    analyse(input) {
      checkExclusions(input.tubes, input.exclusions)
      const tubes = fitSignalTubes(input, signals)
      return seriesOutcome({ input, tubes, digit, flags: [...flags?.(input) ?? [], ...sdFlags(input)], method: used => method(input, used) })
    },
    evidence: relaxivityEvidence,
    describe: conditions => describeConditions(`r_${digit}`, conditions),
    seriesFigure: outcome => seriesFigureOf(outcome, words),
    tubeFigure: tube => tubeFigureOf(tube, words),
  }
}

import type { AnalysisInput, FitOptionSpec } from '../types'

/** Draws of the residual bootstrap: enough for the ends of a 95 % interval to hold still to a few per cent of its width. */
export const BOOTSTRAP_DRAWS = 999

export const INTERVAL_OPTION: FitOptionSpec = {
  key: 'interval', label: 'Interval', type: 'choice', standard: 'studentT', help: 'Where the sum of squares is not a parabola, the profile is the truer one; the standard errors stay as they are',
  choices: [
    { value: 'studentT', label: 'value ± Student t times SE' }, { value: 'profile', label: 'profile of the sum of squares' },
    { value: 'bootstrap', label: `residual bootstrap, ${BOOTSTRAP_DRAWS} draws` },
  ],
}

export const SKIP_ECHOES_OPTION: FitOptionSpec = {
  key: 'skipEchoes', label: 'First echoes left out', type: 'integer', min: 0, max: 64, standard: 0, help: 'Of every tube: the first echoes read high or low where refocusing is imperfect',
}

export const NOISE_OPTION: FitOptionSpec = {
  key: 'noiseSigma', label: 'Noise of one pixel', type: 'choice', standard: 'measured', models: ['multiEchoNoiseFloor', 'multiEchoMeanSquares'],
  help: 'Measured needs the SD of the background among the conditions; where it is not given, the noise is fitted',
  choices: [{ value: 'measured', label: 'measured in the background, if given' }, { value: 'fitted', label: 'fitted with each tube' }],
}

/** Value of an option, its standard where it was not chosen. */
export function optionOf(input: Pick<AnalysisInput, 'options'>, spec: FitOptionSpec): string | number {
  const value = input.options[spec.key]
  return value === undefined || typeof value === 'boolean' ? spec.standard : value
}

export interface OptionProblem { key: string, message: string, accepted: string }

/** What is wrong with the options chosen for a fit; null when nothing is. An option of another model is refused as well: it would silently do nothing. */
export function findOptionProblem(specs: readonly FitOptionSpec[], modelId: string, options: AnalysisInput['options']): OptionProblem | null {
  for (const [key, value] of Object.entries(options)) {
    const spec = specs.find(one => one.key === key)
    const known = specs.filter(one => one.models === undefined || one.models.includes(modelId)).map(one => one.key)
    if (spec === undefined || !known.includes(key)) {
      return { key, message: `This fit has no option ${key}${spec === undefined ? '' : ` with the model ${modelId}`}.`, accepted: known.length > 0 ? known.join(', ') : 'no options' }
    }
    const problem = valueProblem(spec, value)
    if (problem !== null) return { key, ...problem }
  }
  return null
}

function valueProblem(spec: FitOptionSpec, value: string | number | boolean): { message: string, accepted: string } | null {
  if (spec.type === 'choice') {
    const values = (spec.choices ?? []).map(choice => choice.value)
    return typeof value === 'string' && values.includes(value) ? null : { message: `${spec.label}: ${JSON.stringify(value)} is no choice.`, accepted: values.join(', ') }
  }
  const isNumber = typeof value === 'number' && Number.isFinite(value) && (spec.type !== 'integer' || Number.isInteger(value))
  const isInside = isNumber && value >= (spec.min ?? -Infinity) && value <= (spec.max ?? Infinity)
  const range = `${spec.type === 'integer' ? 'a whole number' : 'a number'} from ${spec.min ?? 'any'} to ${spec.max ?? 'any'}${spec.unit ? ` ${spec.unit}` : ''}`
  return isInside ? null : { message: `${spec.label}: ${JSON.stringify(value)} is not accepted.`, accepted: range }
}

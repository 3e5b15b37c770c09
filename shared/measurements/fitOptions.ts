import type { AnalysisInput, FitOptionSpec } from './types'

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

/** Options that differ from their standard, in words: 'Interval: profile of the sum of squares'. */
export function optionWords(specs: readonly FitOptionSpec[], options: AnalysisInput['options']): string[] {
  return specs.flatMap((spec) => {
    const value = options[spec.key]
    if (value === undefined || value === spec.standard) return []
    return [`${spec.label}: ${spec.choices?.find(choice => choice.value === value)?.label ?? `${String(value)}${spec.unit ? ` ${spec.unit}` : ''}`}`]
  })
}

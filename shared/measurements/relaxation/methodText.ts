import { CELSIUS_ZERO_K } from '../../science/constants'
import { ENGINE_VERSION } from '../../science/least-squares/engine'
import type { AnalysisInput, Conditions, TubeResult } from '../types'
import { SAMPLE_CONDITIONS } from './conditions'

const plain = (value: number, digits = 4): string => String(Number(value.toPrecision(digits)))

/** Label of a chosen condition, or null where it was not given. */
export function choiceLabel(key: string, conditions: Conditions): string | null {
  const value = conditions[key] ?? null
  if (value === null) return null
  return SAMPLE_CONDITIONS.find(spec => spec.key === key)?.choices?.find(choice => choice.value === value)?.label ?? String(value)
}

/** '5 tubes (1 without agent), 0 to 1 mM'. */
export function tubesText(used: readonly TubeResult[]): string {
  const blanks = used.filter(tube => tube.role === 'blank').length
  const concs = used.map(tube => tube.conc_mM)
  return `${used.length} tubes (${blanks === 0 ? 'none' : blanks} without agent), ${plain(Math.min(...concs))} to ${plain(Math.max(...concs))} mM of metal`
}

/** ' at 3 T, 37.0 °C and pH 7.4 in plasma', as far as the conditions are known. */
export function conditionsText(conditions: Conditions): string {
  const { b0_T, temperature_K, pH } = conditions
  const parts = [
    typeof b0_T === 'number' ? `${plain(b0_T)} T` : null, typeof temperature_K === 'number' ? `${(temperature_K - CELSIUS_ZERO_K).toFixed(1)} °C` : null,
    typeof pH === 'number' ? `pH ${plain(pH, 3)}` : null,
  ].filter(part => part !== null)
  const medium = choiceLabel('medium', conditions)
  return `${parts.length > 0 ? ` at ${parts.join(', ')}` : ''}${medium === null ? '' : ` in ${medium}`}`
}

/** '10 inversion times from 0.05 to 8 s'. */
export function samplingText(used: readonly TubeResult[], { plural, unit, per }: { plural: string, unit: string, per: number }): string {
  const times = used.flatMap(tube => tube.points.map(point => point.x))
  const [low, high] = times.reduce(([a, b], time) => [Math.min(a, time), Math.max(b, time)], [Infinity, -Infinity])
  return `${new Set(times).size} ${plural} from ${plain(low * per)} to ${plain(high * per)} ${unit}`
}

/** What the errors of the times rest on: the source of σ, where it is one for all tubes. */
export function noiseText(used: readonly TubeResult[]): string {
  const sources = [...new Set(used.map(tube => tube.statistics?.sigma.replace(/^[^,]* au, /, '').replace(/, \d+ degrees of freedom$/, '')).filter(source => source !== undefined))]
  return sources.length === 0 ? '' : `Standard errors rest on noise ${sources.join(' or ')}. `
}

/** How the intervals of the times were found. */
export function intervalText(used: readonly TubeResult[]): string {
  const words = [...new Set(used.map(tube => tube.intervalMethod?.replace(/, .*$/, '')).filter(one => one !== undefined && one !== 'none'))]
  return words.length === 0 ? '' : `Intervals are 95 % (${words.join(' or ')}). `
}

/** How the slope was found, with the errors that went into it. */
export function slopeText(digit: '1' | '2', used: readonly TubeResult[], { conditions, tubes }: AnalysisInput): string {
  const hasErrors = used.every(tube => tube.parameters.some(parameter => parameter.name === `rate${digit}_per_s` && parameter.se !== null))
  const hasOwn = tubes.some(tube => (tube.concSe_mM ?? 0) > 0)
  const line = !hasErrors ? 'by an unweighted line' : hasOwn ? 'by a line with errors in rate and concentration (York et al. 2004)' : 'by a line weighted with 1/SE²'
  const scale = conditions.concScaleError_frac
  const shared = typeof scale === 'number' && scale > 0 ? `; a common concentration error of ${plain(100 * scale)} % was added in quadrature` : ''
  const basis = choiceLabel('concBasis', conditions)
  return `r${digit} is the slope of R${digit} = 1/T${digit} against concentration${basis === null ? '' : ` (from ${basis})`} ${line}${shared}.`
}

/** What was left out and why; empty where nothing was. */
export function leftOutText({ exclusions }: AnalysisInput): string {
  if (exclusions.length === 0) return ''
  const tubes = exclusions.filter(exclusion => exclusion.pointIndex === null).length
  const points = exclusions.length - tubes
  const parts = [tubes > 0 ? `${tubes} ${tubes === 1 ? 'tube' : 'tubes'}` : null, points > 0 ? `${points} ${points === 1 ? 'point' : 'points'}` : null].filter(part => part !== null)
  const reasons = [...new Set(exclusions.map(exclusion => exclusion.reason))]
  return ` Left out: ${parts.join(' and ')} (${reasons.join('; ')}).`
}

export const engineText = (): string => ` Least squares: engine version ${ENGINE_VERSION}.`

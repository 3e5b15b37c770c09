import type { AnalysisInput, Conditions } from '../types'
import { mediumWords } from '../../evidence/records/common'
import { leftOutText } from '../relaxation/methodText'
import type { LawDone } from './lawSeries'

const plain = (value: number, digits = 3): string => String(Number(value.toPrecision(digits)))
const CONSTANT_NAMES: Readonly<Record<string, string>> = { rateLawSum: 'a sum of terms', rateLawSumSecond: 'a sum of terms with a second proton', rateLawSumMixed: 'a sum of terms with mixed ones', rateLawSaturation: 'a form that levels off', halfLifeOneAcid: 'a half-life' }

/** ' at I = 1 M (KCl)'. */
export function solutionText({ ionicStrength_mM, medium }: Conditions): string {
  const strength = typeof ionicStrength_mM === 'number' ? ` at I = ${plain(ionicStrength_mM / 1000)} M` : ''
  return `${strength}${typeof medium === 'string' ? ` (${mediumWords(medium).replaceAll('_', '')})` : ''}`
}

/** How rates became a law, for a methods section. */
export function lawText({ modelId, conditions }: AnalysisInput, { used, names }: LawDone): string {
  const pHs = used.map(rate => rate.point.conditions.pH)
  const temperatures = [...new Set(used.map(rate => (rate.point.conditions.temperature_K - 273.15).toFixed(0)))]
  const where = `${temperatures.join(', ')} °C${solutionText(conditions)}, pH ${plain(Math.min(...pHs))}${Math.min(...pHs) === Math.max(...pHs) ? '' : ` to ${plain(Math.max(...pHs))}`}`
  if (names.includes('halfLifeAcid_s')) return ` The half-life in acid is ln 2/k of ${used.length} ${used.length === 1 ? 'flask' : 'flasks'} (${where}); its interval is taken from ln k.`
  return ` ${used.length} rates (${where}) were fitted with ${CONSTANT_NAMES[modelId] ?? modelId}, no constant below zero; constants that the rates cannot tell from zero are given as one-sided 95 % bounds from the profile of chi-square.`
    + (temperatures.length > 1 ? ' Temperatures were joined by one activation enthalpy (Eyring).' : '')
}

export { leftOutText }

import type { NamedQuantity } from '../../evidence/quantity'
import { evidenceQuantity } from '../../evidence/quantities'
import { formatDuration } from '../../format'
import { halfLifeOf } from '../../science/kinetics/firstOrder'
import { fitRateLaw, lawOfFit, type FittedTerm, type RateFit } from '../../science/kinetics/rateFit'
import { evaluateRateLaw, type RateLaw } from '../../science/kinetics/rateLaw'
import { RATE_TERMS, type CompetitorMetal, type SumConstant } from '../../science/kinetics/rateTerms'
import { fitActivation, type Activation } from '../../science/kinetics/temperatureFit'
import type { KineticsRefusal } from '../../science/kinetics/weightedLinear'
import { tQuantile } from '../../science/statistics'
import type { Flag, SeriesResult } from '../types'
import { lawPoints } from './lawPoints'
import { byTemperature, meanTemperature_K, type SeriesRate } from './seriesRates'

export interface LawDone { ok: true, series: SeriesResult, flags: Flag[], used: SeriesRate[], names: string[] }
export type LawModel = 'rateLawSum' | 'rateLawSumSecond' | 'rateLawSumMixed'

const METALS: readonly CompetitorMetal[] = ['Zn', 'Cu', 'Ca']
const varies = (values: readonly number[]): boolean => new Set(values.map(value => value.toPrecision(4))).size > 1
const metalOf = (rate: SeriesRate, metal: CompetitorMetal): number => rate.point.conditions.competitors_M[metal] ?? 0

/** Terms of the sum form that were varied. The spontaneous term is always among them: left out, noise would become half-lives of thousands of years. */
export function variedTerms(rates: readonly SeriesRate[], model: LawModel): SumConstant[] {
  const acid = varies(rates.map(rate => rate.point.conditions.pH))
  const metals = METALS.filter(metal => varies(rates.map(rate => metalOf(rate, metal))))
  const mixed = metals.flatMap((metal): SumConstant[] => metal === 'Ca' ? [] : [`k${metal}H_per_M2_s`])
  return [
    'k0_per_s', ...(acid ? ['k1_per_M_s' as const] : []), ...(acid && model === 'rateLawSumSecond' ? ['k2_per_M2_s' as const] : []),
    ...metals.map((metal): SumConstant => `k${metal}_per_M_s`), ...(acid && model === 'rateLawSumMixed' ? mixed : []),
  ]
}

/** What the constant term holds besides the spontaneous path: acid that never changed, a metal that was never absent. */
function lumpedWith(rates: readonly SeriesRate[]): string[] {
  const acid = varies(rates.map(rate => rate.point.conditions.pH)) ? [] : ['the acid']
  return [...acid, ...METALS.filter(metal => !varies(rates.map(rate => metalOf(rate, metal))) && metalOf(rates[0]!, metal) > 0).map(metal => ({ Zn: 'zinc', Cu: 'copper', Ca: 'calcium' })[metal])]
}

export const quantityLabel = (id: string): string => { const { base, sub } = evidenceQuantity(id); return sub === '' ? base : `${base}_{${sub}}` }

function namedTerm({ name, value, kind, se, upper95 }: FittedTerm, dof: number, isLumped: boolean): NamedQuantity {
  const base = { name, label: quantityLabel(name), unit: evidenceQuantity(name).unit, evidenceId: null }
  if (kind === '<' || isLumped) return { ...base, value: kind === '<' ? value : upper95, kind: '<', se: null, interval: null }
  const half = se === null ? 0 : tQuantile(0.975, dof) * se / value
  return { ...base, value, kind: '=', se, interval: se === null ? null : [value * Math.exp(-half), value * Math.exp(half)] }
}

/**
 * One activation enthalpy for all terms: every rate over what the law says for its flask at the law's temperature, against temperature.
 * Needs three temperatures; refused by value otherwise.
 */
function activationOf(rates: readonly SeriesRate[], law: RateLaw, temperature_K: number): Activation | KineticsRefusal {
  const exact: RateLaw = { ...law, constants: law.constants.filter(constant => constant.kind === '=').map(constant => ({ ...constant, enthalpy_kJ_per_mol: null })) }
  const points = rates.flatMap(({ point }) => {
    const expected = evaluateRateLaw(exact, { ...point.conditions, temperature_K })
    return expected.ok ? [{ temperature_K: point.conditions.temperature_K, rate_per_s: point.rate_per_s / expected.value, se_per_s: point.se_per_s === null ? null : point.se_per_s / expected.value }] : []
  })
  return fitActivation(points, 'eyring')
}

/** The sum form through rates at one temperature, carried to others by one enthalpy where they were measured at three or more. */
export function fitSumLaw(rates: readonly SeriesRate[], model: LawModel): LawDone | KineticsRefusal {
  const counting = rates.filter(rate => rate.excluded === null)
  const groups = byTemperature(counting)
  const main = groups[0]!
  const names = variedTerms(main, model)
  const fit = fitRateLaw(main.map(rate => rate.point), names)
  if (!fit.ok) return fit
  const bare = lawOfFit(fit, { kJ_per_mol: null, se_kJ_per_mol: null })
  const activation = groups.length > 1 ? activationOf(counting, bare, fit.temperature_K) : null
  if (activation && !activation.ok) {
    const at = groups.map(group => `${(meanTemperature_K(group) - 273.15).toFixed(0)} °C`).join(', ')
    return { ...activation, reason: 'temperaturesWithoutEnthalpy', message: `The rates were measured at ${at}, and no activation enthalpy comes of them: ${activation.message}`, accepted: `${activation.accepted} Or the courses of one temperature, the others left out.` }
  }
  const law = activation ? lawOfFit(fit, { kJ_per_mol: activation.energy_kJ_per_mol, se_kJ_per_mol: activation.energySe_kJ_per_mol }) : bare
  const lumped = lumpedWith(main)
  const terms = fit.terms.map(term => namedTerm(term, fit.dof, term.name === 'k0_per_s' && lumped.length > 0))
  const headline = [...terms].filter(term => term.kind === '=').sort((a, b) => share(b, main) - share(a, main))[0] ?? terms[0]!
  const enthalpy = activation ? [activationQuantity(activation)] : []
  return {
    ok: true, used: counting, names: terms.map(term => term.name), flags: lawFlags(fit, lumped, activation),
    series: {
      headline, parameters: [headline, ...terms.filter(term => term !== headline), ...enthalpy], ...lawPoints({ rates, main, law, terms: fit.terms, activation }),
      statistics: statisticsOf(fit, main, { law, activation, known: main.every(rate => rate.point.se_per_s !== null) }), correlation: correlationOf(fit, lumped.length > 0),
    },
  }
}

/** What a term adds to the rates, at most: the headline is the term that the rates say most about. */
const share = (term: NamedQuantity, rates: readonly SeriesRate[]): number => Math.max(...rates.map(rate => term.value * RATE_TERMS[term.name as SumConstant].factor(rate.point.conditions) / rate.point.rate_per_s))

function activationQuantity({ energy_kJ_per_mol: value, energySe_kJ_per_mol: se, dof }: Activation): NamedQuantity {
  const half = dof > 0 ? tQuantile(0.975, dof) * se : null
  return { name: ENTHALPY, label: 'ΔH^‡', unit: 'kJ/mol', value, kind: '=', se, interval: half === null ? null : [value - half, value + half], evidenceId: null }
}

export const ENTHALPY = 'activationEnthalpy_kJ_per_mol'
export const STATISTIC = { temperature: 'Temperature of the law', lowPH: 'Lowest pH', highPH: 'Highest pH' } as const

function correlationOf(fit: RateFit, isLumped: boolean): SeriesResult['correlation'] {
  const names = fit.terms.filter(term => term.kind === '=' && !(isLumped && term.name === 'k0_per_s')).map(term => term.name)
  return names.length < 2 ? null : { names, labels: names.map(quantityLabel), matrix: names.map(a => names.map(b => a === b ? 1 : fit.correlation(a, b))) }
}

const shown = (value: number, digits = 3): string => String(Number(value.toPrecision(digits)))

function statisticsOf(fit: RateFit, main: readonly SeriesRate[], { law, activation, known }: { law: RateLaw, activation: Activation | null, known: boolean }): SeriesResult['statistics'] {
  const at = evaluateRateLaw(law, { pH: 7.4, temperature_K: fit.temperature_K, competitors_M: {} })
  const half = at.ok ? halfLifeOf(at) : null
  const words = { '=': 'about', '<': 'at most', '>': 'at least' } as const
  return [
    { label: 'Law', value: null, text: `k_{obs} = ${fit.terms.map(term => termText(term.name)).join(' + ')}` },
    { label: 'Rates in the law', value: main.length, text: `${main.length}, ${fit.dof} degrees of freedom` },
    { label: 'Weights', value: null, text: known ? '1/SE² of the rates' : 'equal relative errors: an error is missing' },
    { label: 'Reduced χ²', value: known ? fit.chi2 / fit.dof : null, text: known ? shown(fit.chi2 / fit.dof) : `not available: scatter about the law ${shown(100 * Math.sqrt(fit.chi2 / fit.dof), 2)} %` },
    { label: STATISTIC.temperature, value: Number(fit.temperature_K.toPrecision(12)), text: `${(fit.temperature_K - 273.15).toFixed(1)} °C` },
    { label: STATISTIC.lowPH, value: fit.pHMin, text: shown(fit.pHMin) }, { label: STATISTIC.highPH, value: fit.pHMax, text: shown(fit.pHMax) },
    ...(activation ? [{ label: 'Activation entropy', value: activation.second, text: `${shown(activation.second)} ± ${shown(activation.secondSe, 2)} J/(mol K), for the rate over that of the law` }] : []),
    ...(half && Number.isFinite(half.value) ? [{ label: 'Half-life at pH 7.4 by this law, without metals', value: half.value, text: `${words[half.kind]} ${formatDuration(half.value, 2)}, ${at.ok && at.decadesExtrapolated ? `${at.decadesExtrapolated.toFixed(1)} decades of [H^{+}] extrapolated` : 'within the measured pH'}` }] : []),
  ]
}

/** 'k_{1}[H]' and so on. */
function termText(name: SumConstant): string {
  const factors: Readonly<Record<SumConstant, string>> = { k0_per_s: '', k1_per_M_s: '[H]', k2_per_M2_s: '[H]²', kZn_per_M_s: '[Zn]', kCu_per_M_s: '[Cu]', kCa_per_M_s: '[Ca]', kZnH_per_M2_s: '[Zn][H]', kCuH_per_M2_s: '[Cu][H]' }
  return `${quantityLabel(name)}${factors[name]}`
}

function lawFlags(fit: RateFit, lumped: readonly string[], activation: Activation | null): Flag[] {
  const bounds = fit.terms.filter(term => term.kind === '<').map(term => quantityLabel(term.name))
  const flag = (id: string, title: string, sentence: string): Flag => ({ id, title, sentence, tubeNo: null })
  return [
    ...(bounds.length > 0 ? [flag('boundOnly', 'Known as a bound only', `${bounds.join(', ')}: the rates cannot tell ${bounds.length === 1 ? 'it' : 'them'} from zero. The one-sided 95 % bound stays in every extrapolation; rates at higher pH narrow it.`)] : []),
    ...(lumped.length > 0 ? [flag('lumped', 'The constant term holds more', `${lumped.join(' and ')} never changed, so k_0 holds what ${lumped.length === 1 ? 'it adds' : 'they add'} and is kept as "at most". Vary ${lumped.length === 1 ? 'it' : 'each'} to part the terms.`)] : []),
    ...(activation ? [flag('oneEnthalpy', 'One enthalpy for all terms', 'Every term is carried to other temperatures by the same activation enthalpy.')] : []),
  ]
}

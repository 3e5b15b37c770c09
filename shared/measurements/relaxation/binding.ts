import { fitModel } from '../../science/least-squares/fitModel'
import type { FitDone } from '../../science/least-squares/outcome'
import { bindingIsotherm } from '../../science/models/bindingIsotherm'
import type { Model } from '../../science/models/define'
import { fUpperP } from '../../science/statistics'
import { pWords } from '../../science/relaxometry/seriesFlags'
import type { Conditions, Flag, SeriesResult } from '../types'
import type { TubeRate } from './tubeRate'
import { namedParameter } from './tubeResult'

export interface BindingFit {
  parameters: SeriesResult['parameters']
  curve: SeriesResult['curve'] | null
  statistics: SeriesResult['statistics']
  flags: Flag[]
  method: string
}

const CURVE_POINTS = 61
const flagOf = (id: string, title: string, sentence: string): Flag => ({ id, title, sentence, tubeNo: null })

/** A binding isotherm through the same rates as the straight line; a flag that says why where there is none. */
export function fitBinding(rates: readonly TubeRate[], { protein_mM }: Conditions): BindingFit {
  const nothing = { parameters: [], curve: null, statistics: [], method: '' }
  if (typeof protein_mM !== 'number') return { ...nothing, flags: [flagOf('noProtein', 'No binding isotherm', 'It needs the concentration of the protein: add it to the conditions, and fit again.')] }
  const model = bindingIsotherm as Model
  const [x, y] = [rates.map(rate => rate.conc_mM), rates.map(rate => rate.rate_per_s)]
  const own = rates.every(rate => (rate.se_per_s ?? 0) > 0) ? rates.map(rate => rate.se_per_s ?? 0) : null
  const settings = { protein_mM }
  const plain = fitModel(model, { x, y, sigma: own }, { settings })
  const sigma = own && plain.ok ? effectiveSigma(rates, own, at => model.evaluate(at, valuesOf(plain), settings)) : own
  const fit = sigma === own ? plain : fitModel(model, { x, y, sigma }, { settings })
  if (!fit.ok) return { ...nothing, flags: [flagOf('noBinding', 'No binding isotherm', `${fit.message} Accepted: ${fit.accepted}`)] }
  const values = valuesOf(fit)
  const [low, high] = [Math.min(...x), Math.max(...x)]
  const flags = fit.noInterval ? [flagOf('bindingOpen', 'Binding not settled by these tubes', `${fit.noInterval.message} Measure more concentrations around that of the protein, ${protein_mM} mM.`)] : []
  return {
    parameters: fit.parameters.filter(one => one.name !== 'rateDia_per_s').map(namedParameter), flags,
    curve: { name: 'isotherm', points: Array.from({ length: CURVE_POINTS }, (_, i) => { const at = low + (high - low) * i / (CURVE_POINTS - 1); return { x: at, y: model.evaluate(at, values, settings) } }) },
    statistics: [{ label: 'Isotherm against line', value: gainP(fit, x, y, sigma), text: gainText(gainP(fit, x, y, sigma)) }],
    method: ` A binding isotherm with one kind of site and ${protein_mM} mM of protein was fitted beside the line (${bindingIsotherm.equation}).`,
  }
}

const valuesOf = (fit: FitDone): Record<string, number> => Object.fromEntries(fit.parameters.map(one => [one.name, one.value]))

/**
 * Errors of the rates with those of each tube's own concentration, by the slope of the curve there: √(σ_R² + (dR/dc·σ_c)²).
 * @source Orear, Am. J. Phys. 50, 912 (1982), effective variance; from memory
 */
function effectiveSigma(rates: readonly TubeRate[], own: readonly number[], curve: (conc_mM: number) => number): readonly number[] {
  if (rates.every(rate => !rate.concSe_mM)) return own
  const step = 1e-4 * Math.max(...rates.map(rate => rate.conc_mM))
  return rates.map(({ conc_mM, concSe_mM }, i) => Math.hypot(own[i] ?? 0, (curve(conc_mM + step) - curve(conc_mM)) / step * (concSe_mM ?? 0)))
}

/** F-test of the two parameters that the isotherm has more than the line, which is its special case. */
function gainP(fit: { readonly dof: number, readonly fitted: readonly number[] }, x: readonly number[], y: readonly number[], sigma: readonly number[] | null): number | null {
  if (fit.dof < 1) return null
  const weight = (i: number) => sigma ? 1 / (sigma[i] ?? 1) ** 2 : 1
  const total = x.reduce((sum, _, i) => sum + weight(i), 0)
  const [meanX, meanY] = [x, y].map(values => values.reduce((sum, value, i) => sum + weight(i) * value, 0) / total) as [number, number]
  const slope = x.reduce((sum, value, i) => sum + weight(i) * (value - meanX) * ((y[i] ?? 0) - meanY), 0) / x.reduce((sum, value, i) => sum + weight(i) * (value - meanX) ** 2, 0)
  const line = y.reduce((sum, value, i) => sum + weight(i) * (value - meanY - slope * ((x[i] ?? 0) - meanX)) ** 2, 0)
  const bent = y.reduce((sum, value, i) => sum + weight(i) * (value - (fit.fitted[i] ?? 0)) ** 2, 0)
  return bent > 0 ? fUpperP(Math.max(0, line - bent) / 2 / (bent / fit.dof), 2, fit.dof) : null
}

const gainText = (p: number | null): string => p === null ? 'too few tubes to weigh them' : `${pWords(p)} of so large a gain if the line holds`

export function withBinding(series: SeriesResult, binding: BindingFit): SeriesResult {
  return {
    ...series, parameters: [...series.parameters, ...binding.parameters], statistics: [...series.statistics, ...binding.statistics], ...(binding.curve ? { curve: binding.curve } : {}),
  }
}

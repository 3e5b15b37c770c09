import type { NamedQuantity } from '../../evidence/quantity'
import { evidenceQuantity } from '../../evidence/quantities'
import { rateGradient } from '../../science/kinetics/rateGradient'
import { hydrogen_M, type CompetitorMetal } from '../../science/kinetics/rateTerms'
import { fitSaturation, type SaturationFit } from '../../science/kinetics/saturationFit'
import { refuseKinetics, type KineticsRefusal } from '../../science/kinetics/weightedLinear'
import { tQuantile } from '../../science/statistics'
import { named } from './courseTubes'
import { quantityLabel, STATISTIC, variedTerms, type LawDone } from './lawSeries'
import { byTemperature, meanTemperature_K, type SeriesRate } from './seriesRates'

/** Rates that level off with acid or with one metal, at one temperature. */
export function fitSaturationLaw(rates: readonly SeriesRate[]): LawDone | KineticsRefusal {
  const counting = rates.filter(rate => rate.excluded === null)
  if (byTemperature(counting).length > 1) return refuseKinetics('severalTemperatures', 'The rates were measured at several temperatures.', 'Rates of one temperature for the form that levels off; the others left out.')
  const varied = variedTerms(counting, 'rateLawSum').filter(name => name !== 'k0_per_s')
  if (varied.length !== 1) return refuseKinetics('severalVaried', `${varied.length === 0 ? 'Nothing was' : 'Acid and metal, or several metals, were'} varied.`, 'Acid alone varied, or one metal alone, for the form that levels off.')
  const metal = varied[0] === 'k1_per_M_s' ? null : varied[0]!.slice(1, 3) as CompetitorMetal
  const conc_M = ({ point: { conditions } }: SeriesRate): number => metal === null ? hydrogen_M(conditions.pH) : conditions.competitors_M[metal] ?? 0
  const fit = fitSaturation(counting.filter(rate => conc_M(rate) > 0).map(rate => ({ conc_M: conc_M(rate), rate_per_s: rate.point.rate_per_s, se_per_s: rate.point.se_per_s })))
  return fit.ok ? done({ rates, counting, fit, metal, conc_M }) : fit
}

interface Parts { rates: readonly SeriesRate[], counting: SeriesRate[], fit: SaturationFit, metal: CompetitorMetal | null, conc_M: (rate: SeriesRate) => number }

function done({ rates, counting, fit, metal, conc_M }: Parts): LawDone {
  const [rateName, bindingName] = metal === null ? ['k1_per_s', 'kProton_per_M'] as const : ['k3_per_s', 'kMetal_per_M'] as const
  const of = (name: string, value: Parameters<typeof named>[1]): NamedQuantity => named({ name, label: quantityLabel(name), unit: evidenceQuantity(name).unit }, value)
  const headline = of(rateName, fit.k1_per_s)
  const { value: k0, upper95 } = fit.k0_per_s
  const isSeen = k0 > upper95 - k0
  const spontaneous: NamedQuantity = isSeen
    ? of('k0_per_s', { value: k0, kind: '=', se: (upper95 - k0) / tQuantile(0.95, fit.dof), interval: null })
    : of('k0_per_s', { value: upper95, kind: '<', se: null, interval: null })
  const values = { k0_per_s: k0, [rateName]: fit.k1_per_s.value, [bindingName]: fit.binding_per_M.value }
  const at = (x: number): number => rateGradient(values, metal === null ? x : 0, metal === null ? 0 : x).value
  const xs = rates.map(conc_M)
  const pHs = counting.map(rate => rate.point.conditions.pH)
  const high = Math.max(...xs)
  const temperature_K = meanTemperature_K(counting)
  return {
    ok: true, used: counting, names: [rateName, bindingName, 'k0_per_s'],
    flags: isSeen ? [] : [{ id: 'boundInSaturation', title: 'k_0 is a bound', sentence: 'Below half saturation the form is a sum of k_0 and k_1K[H]; k_0 is known as "at most" only, which this form cannot carry to other pH. For an extrapolation fit the sum form to the rates below half saturation.', tubeNo: null }],
    series: {
      headline, parameters: [headline, of(bindingName, fit.binding_per_M), spontaneous], correlation: null, band: [],
      points: rates.map(({ tubeNo, label, excluded, point }, i) => ({ tubeNo, label, excluded, x: xs[i]!, y: point.rate_per_s, ySe: point.se_per_s, fitted: at(xs[i]!), studentised: null, cook: null, leaveOneOut: null })),
      line: Array.from({ length: 61 }, (_, i) => high * i / 60).map(x => ({ x, y: at(x) })),
      axes: { x: { label: metal === null ? '[H^{+}]' : `[${metal}]`, unit: 'M', scale: 'linear' }, y: { label: 'k_{obs}', unit: 's^-1', scale: 'linear' } },
      statistics: [
        { label: 'Law', value: null, text: metal === null ? 'k_{obs} = (k_0 + k_1K_H[H])/(1 + K_H[H])' : `k_{obs} = (k_0 + k_3K_M[${metal}])/(1 + K_M[${metal}])` },
        { label: 'Rates in the law', value: counting.length, text: `${counting.length}, ${fit.dof} degrees of freedom` },
        { label: STATISTIC.temperature, value: temperature_K, text: `${(temperature_K - 273.15).toFixed(1)} °C` },
        { label: STATISTIC.lowPH, value: Math.min(...pHs), text: Math.min(...pHs).toFixed(2) }, { label: STATISTIC.highPH, value: Math.max(...pHs), text: Math.max(...pHs).toFixed(2) },
        ...(metal === null ? [] : [{ label: 'Metal of the law', value: null, text: metal }]),
      ],
    },
  }
}

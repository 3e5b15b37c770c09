import { formatDuration } from '../../format'
import { halfLifeOf, logInterval, type RateValue } from '../../science/kinetics/firstOrder'
import { fitActivation } from '../../science/kinetics/temperatureFit'
import { refuseKinetics, type KineticsRefusal } from '../../science/kinetics/weightedLinear'
import { inverseVarianceMean } from '../../science/statistics'
import type { TubeResult } from '../types'
import { named } from './courseTubes'
import { isStrongAcid } from './flask'
import { ENTHALPY, quantityLabel, STATISTIC, type LawDone } from './lawSeries'
import { byTemperature, distinct, meanTemperature_K, type SeriesRate } from './seriesRates'

/** Half-life of courses that all stand in one strong acid: pooled over the flasks nearest to 25 °C. */
export function halfLifeSeries(rates: readonly SeriesRate[], results: readonly TubeResult[]): LawDone | KineticsRefusal {
  const counting = rates.filter(rate => rate.excluded === null)
  if (distinct(counting) > 1) return refuseKinetics('severalConditions', `${distinct(counting)} different conditions: one half-life cannot stand for all.`, 'Flasks of one acid, the others left out; or a rate law from three conditions or more.')
  const groups = byTemperature(counting)
  const main = groups[0]!
  if (!isStrongAcid(main[0]!.flask)) {
    return refuseKinetics('oneCondition', 'All flasks hold the same solution, and it is not a strong acid without metal: its half-life compares with nothing.', 'Acid of 0.01 M or more without competing metal, or three conditions or more for a rate law.')
  }
  const rate = pooled(main, results)
  const headline = named({ name: 'halfLifeAcid_s', label: quantityLabel('halfLifeAcid_s'), unit: 's' }, halfLifeOf(rate))
  const activation = groups.length > 2 ? fitActivation(counting.map(({ point }) => ({ ...point, temperature_K: point.conditions.temperature_K })), 'eyring') : null
  const enthalpy = activation?.ok ? [named({ name: ENTHALPY, label: 'ΔH^‡', unit: 'kJ/mol' }, { value: activation.energy_kJ_per_mol, kind: '=', se: activation.energySe_kJ_per_mol, interval: null })] : []
  const temperature_K = meanTemperature_K(main)
  return {
    ok: true, used: counting, names: ['halfLifeAcid_s'],
    flags: groups.length > 1 ? [{ id: 'severalTemperatures', title: 'Several temperatures', sentence: `The half-life is that at ${(temperature_K - 273.15).toFixed(0)} °C; the other flasks say how it changes with temperature.`, tubeNo: null }] : [],
    series: {
      headline, parameters: [headline, named({ name: 'kObs_per_s', label: 'k_{obs}', unit: 's^-1' }, rate), ...enthalpy], line: [], band: [],
      points: rates.map(({ tubeNo, label, excluded, point }, i) => ({ tubeNo, label, excluded, x: i + 1, y: point.rate_per_s, ySe: point.se_per_s, fitted: rate.value, studentised: null, cook: null, leaveOneOut: null })),
      statistics: [
        { label: 'Half-life', value: headline.value, text: formatDuration(headline.value) }, { label: 'Flasks pooled', value: main.length, text: String(main.length) },
        { label: STATISTIC.temperature, value: temperature_K, text: `${(temperature_K - 273.15).toFixed(1)} °C` },
      ],
    },
  }
}

/** One rate as it is; several by their errors, widened where they scatter more than those allow. */
function pooled(rates: readonly SeriesRate[], results: readonly TubeResult[]): RateValue {
  const [first] = rates
  const values = rates.map(rate => rate.point.rate_per_s)
  const errors = rates.flatMap(rate => rate.point.se_per_s ?? [])
  if (rates.length === 1) {
    const interval = results.find(result => result.tubeNo === first!.tubeNo)?.headline?.interval ?? null
    return { value: values[0]!, kind: '=', se: errors[0] ?? null, interval: interval ?? (errors[0] === undefined ? null : logInterval(values[0]!, errors[0])) }
  }
  const scatter = (): { mean: number, se: number } => {
    const mean = values.reduce((sum, value) => sum + value, 0) / values.length
    return { mean, se: Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1) / values.length) }
  }
  const weighted = errors.length === values.length ? inverseVarianceMean(values, errors) : null
  const { mean, se } = weighted ? { mean: weighted.mean, se: weighted.se * Math.sqrt(Math.max(1, weighted.chi2 / (values.length - 1))) } : scatter()
  return { value: mean, kind: '=', se: se > 0 ? se : null, interval: se > 0 ? logInterval(mean, se) : null }
}

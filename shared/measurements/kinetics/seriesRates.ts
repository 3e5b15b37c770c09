import type { RatePoint } from '../../science/kinetics/rateFit'
import type { AnalysisInput, TubeResult } from '../types'
import { flaskOf, flaskPH, type Flask } from './flask'

/** One rate with the flask it was measured in. */
export interface SeriesRate {
  readonly tubeNo: number
  readonly label: string
  readonly flask: Flask
  readonly point: RatePoint
  /** Reason why it does not count; null = it counts. */
  readonly excluded: string | null
}

interface Measured { tubeNo: number, label: string, flask: Flask, rate_per_s: number, se_per_s: number | null, excluded: string | null }

/** A rate whose acid or temperature is not known belongs to no law; the upload asks for both, so there is none. */
export function seriesRate({ tubeNo, label, flask, rate_per_s, se_per_s, excluded }: Measured): SeriesRate[] {
  const pH = flaskPH(flask)
  if (pH === null || flask.temperature_K === null) return []
  return [{ tubeNo, label, flask, excluded, point: { conditions: { pH, temperature_K: flask.temperature_K, competitors_M: flask.competitors_M }, rate_per_s, se_per_s: se_per_s !== null && se_per_s > 0 ? se_per_s : null } }]
}

/** Rates of the courses that have one. */
export function courseRates({ tubes, conditions }: AnalysisInput, results: readonly TubeResult[]): SeriesRate[] {
  return results.flatMap((result) => {
    const tube = tubes.find(one => one.tubeNo === result.tubeNo)
    if (tube?.role !== 'sample' || result.headline === null) return []
    return seriesRate({ tubeNo: tube.tubeNo, label: tube.label, flask: flaskOf(tube, conditions), rate_per_s: result.headline.value, se_per_s: result.headline.se, excluded: result.excluded })
  })
}

/** Errors for all rates, or for none: then every rate counts by the same relative error. */
export function withEqualErrors(rates: readonly SeriesRate[]): readonly SeriesRate[] {
  return rates.every(rate => rate.point.se_per_s !== null) ? rates : rates.map(rate => ({ ...rate, point: { ...rate.point, se_per_s: null } }))
}

/** What two rates have in common, temperature apart. */
export const conditionKey = ({ point: { conditions: { pH, competitors_M } } }: SeriesRate): string => JSON.stringify([pH.toFixed(4), ...Object.values(competitors_M).map(value => (value ?? 0).toPrecision(4))])

const NEAR_K = 1

/** Rates parted by temperature, to within a kelvin; most conditions first, then nearest to 25 °C. */
export function byTemperature(rates: readonly SeriesRate[]): SeriesRate[][] {
  const groups: SeriesRate[][] = []
  for (const rate of [...rates].sort((a, b) => a.point.conditions.temperature_K - b.point.conditions.temperature_K)) {
    const group = groups.at(-1)
    if (group && rate.point.conditions.temperature_K - group[0]!.point.conditions.temperature_K <= NEAR_K) group.push(rate)
    else groups.push([rate])
  }
  const away = (group: readonly SeriesRate[]): number => Math.abs(group[0]!.point.conditions.temperature_K - 298.15)
  return groups.sort((a, b) => distinct(b) - distinct(a) || away(a) - away(b))
}

export const distinct = (rates: readonly SeriesRate[]): number => new Set(rates.map(conditionKey)).size

/** Without the last bits that summing leaves behind. */
export const meanTemperature_K = (rates: readonly SeriesRate[]): number => Number((rates.reduce((sum, rate) => sum + rate.point.conditions.temperature_K, 0) / rates.length).toPrecision(12))

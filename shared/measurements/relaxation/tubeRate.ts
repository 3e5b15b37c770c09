import type { SeriesTube, TubeResult } from '../types'

/** Rate of one tube as the line through the series takes it. */
export interface TubeRate {
  tubeNo: number
  label: string
  role: SeriesTube['role']
  conc_mM: number
  concSe_mM: number | null
  rate_per_s: number
  /** null where the rate has no standard error. */
  se_per_s: number | null
  /** Reason why it does not count; null = it counts. */
  excluded: string | null
}

/** Rates of the tubes that have one. */
export function ratesFrom(tubes: readonly SeriesTube[], results: readonly TubeResult[], rateName: string): TubeRate[] {
  return results.flatMap((result) => {
    const tube = tubes.find(candidate => candidate.tubeNo === result.tubeNo)
    const rate = result.parameters.find(parameter => parameter.name === rateName)
    if (tube === undefined || rate === undefined || tube.role === 'reference') return []
    const { tubeNo, label, role, conc_mM, concSe_mM } = tube
    return [{ tubeNo, label, role, conc_mM, concSe_mM, rate_per_s: rate.value, se_per_s: rate.se, excluded: result.excluded }]
  })
}

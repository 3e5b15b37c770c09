import type { Exclusion, SeriesTube } from '../types'

/** What was left out of one tube. */
export interface LeftOut {
  /** Reason for the whole tube; null = it counts. */
  tube: string | null
  /** Reason by index of the point. */
  points: ReadonlyMap<number, string>
}

/** @throws Error for an exclusion of a tube or point that does not exist: it would silently change nothing */
export function leftOutOf(tube: SeriesTube, exclusions: readonly Exclusion[]): LeftOut {
  const own = exclusions.filter(exclusion => exclusion.tubeNo === tube.tubeNo)
  const outside = own.find(({ pointIndex }) => pointIndex !== null && !(Number.isInteger(pointIndex) && pointIndex >= 0 && pointIndex < tube.points.rows.length))
  if (outside) throw new Error(`Tube ${tube.tubeNo} has no point ${outside.pointIndex}.`)
  return {
    tube: own.find(exclusion => exclusion.pointIndex === null)?.reason ?? null,
    points: new Map(own.flatMap(({ pointIndex, reason }) => pointIndex === null ? [] : [[pointIndex, reason] as const])),
  }
}

export function checkExclusions(tubes: readonly SeriesTube[], exclusions: readonly Exclusion[]): void {
  const unknown = exclusions.find(exclusion => !tubes.some(tube => tube.tubeNo === exclusion.tubeNo))
  if (unknown) throw new Error(`The series has no tube ${unknown.tubeNo}.`)
}

import type { AnalysisInput, Flag } from '../types'
import { recoveryModelFor } from './recoveryTubes'

/** Flags of a recovery series that come from its conditions rather than from its line. */
export function recoveryFlags({ conditions, modelId, tubes }: AnalysisInput): Flag[] {
  const flags: Flag[] = []
  const flag = (id: string, title: string, sentence: string) => flags.push({ id, title, sentence, tubeNo: null })
  const angle = conditions.readoutAngle_rad
  const isFiniteTr = modelId !== 'inversionRecovery3'
  if (isFiniteTr && typeof angle === 'number' && Math.abs(angle - Math.PI / 2) > 0.04) {
    flag('readoutAngle', 'Read-out angle is not 90°', `The read-out is ${Math.round(angle * 180 / Math.PI)}°; this model holds for 90°. Compare with the three-parameter model.`)
  }
  if (isFiniteTr && modelId !== recoveryModelFor(conditions)) {
    flag('otherModel', 'Model and timing differ', 'The model fitted is not the one that the timing calls for. Compare the two, or correct the timing.')
  }
  const withSd = tubes.filter(tube => tube.points.columns.includes('signalSd_au'))
  const incomplete = withSd.filter(tube => tube.points.rows.some(row => row[2] === null || row[2] === undefined)).map(tube => tube.tubeNo)
  if (incomplete.length > 0) {
    flag('sdIncomplete', 'Standard deviations incomplete', `Tube${incomplete.length > 1 ? 's' : ''} ${incomplete.join(', ')}: some points have no standard deviation, so none of the tube's are used. Complete the column, or leave it out.`)
  }
  return flags
}

import type { AnalysisInput, Flag } from '../types'

/** The recovery model that a timing calls for. */
export function recoveryModelFor({ timing }: AnalysisInput['conditions']): string {
  if (timing === 'inversionToInversion') return 'inversionRecoveryTiRepeat'
  return timing === 'constantDelay' ? 'inversionRecoveryDelay' : 'inversionRecovery3'
}

const flagOf = (id: string, title: string, sentence: string): Flag => ({ id, title, sentence, tubeNo: null })

/** Flags of an inversion-recovery series that come from its conditions rather than from its line. */
export function recoveryFlags({ conditions, modelId }: AnalysisInput): Flag[] {
  const flags: Flag[] = []
  const angle = conditions.readoutAngle_rad
  const isFiniteTr = modelId !== 'inversionRecovery3'
  if (isFiniteTr && typeof angle === 'number' && Math.abs(angle - Math.PI / 2) > 0.04) {
    flags.push(flagOf('readoutAngle', 'Read-out angle is not 90°', `The read-out is ${Math.round(angle * 180 / Math.PI)}°; this model holds for 90°. Compare with the three-parameter model.`))
  }
  if (isFiniteTr && modelId !== recoveryModelFor(conditions)) {
    flags.push(flagOf('otherModel', 'Model and timing differ', 'The model fitted is not the one that the timing calls for. Compare the two, or correct the timing.'))
  }
  return flags
}

/** Standard deviations and region columns that are there for some points only: then none of the tube's count. */
export function sdFlags({ tubes }: AnalysisInput): Flag[] {
  const incomplete = (field: string) => tubes.filter((tube) => {
    const at = tube.points.columns.indexOf(field)
    return at >= 0 && tube.points.rows.some(row => (row[at] ?? null) === null)
  }).map(tube => tube.tubeNo)
  const found = [...new Set([...incomplete('signalSd_au'), ...incomplete('regionSd_au'), ...incomplete('pixels')])].sort((a, b) => a - b)
  if (found.length === 0) return []
  return [flagOf('sdIncomplete', 'Standard deviations incomplete', `Tube${found.length > 1 ? 's' : ''} ${found.join(', ')}: some points have no standard deviation, so none of the tube's are used. Complete the column, or leave it out.`)]
}

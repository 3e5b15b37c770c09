/** States of a check, per fit version, record version or batch version. 'draft' is the absence of any event. */
export const CHECK_STATES = ['draft', 'waiting', 'firstSigned', 'signed', 'returned', 'recalled', 'withdrawn'] as const
export type CheckState = (typeof CHECK_STATES)[number]
export type CheckEvent = Exclude<CheckState, 'draft'>
export type CheckSubjectKind = 'fit' | 'record' | 'batchVersion'

/** Which event may follow which state; everything else is refused. */
const FOLLOWS: Readonly<Record<CheckState, readonly CheckEvent[]>> = {
  draft: ['waiting'],
  waiting: ['signed', 'firstSigned', 'returned', 'recalled'],
  firstSigned: ['signed', 'returned', 'recalled'],
  signed: ['withdrawn'],
  // Back to waiting only with an answer; a new version is a subject of its own.
  returned: ['waiting'],
  recalled: ['waiting'],
  withdrawn: ['waiting'],
}

export const mayFollow = (state: CheckState, event: CheckEvent): boolean => FOLLOWS[state].includes(event)

/** Events that stay with a number for good and therefore need words. */
const NEEDS_COMMENT: readonly CheckEvent[] = ['returned', 'withdrawn']
export const MIN_COMMENT_LENGTH = 10

export function needsComment(state: CheckState, event: CheckEvent): boolean {
  return NEEDS_COMMENT.includes(event) || (event === 'waiting' && (state === 'returned' || state === 'withdrawn'))
}

/** Parts of a fit that decide whether one signature is enough. */
export interface SignatureGround {
  points: number
  pointsLeftOut: number
  /** Slope of the first version and of this one, with the first one's standard error; null where there is none. */
  first: { value: number, se: number | null } | null
  now: { value: number } | null
}

/**
 * Why a second person must sign too; null = one signature is enough.
 * Asked where more than a fifth of the points are out, or the slope moved by more than two standard errors of the first version.
 */
export function secondSignatureReason(ground: SignatureGround): string | null {
  if (ground.pointsLeftOut > ground.points / 5) return `${ground.pointsLeftOut} of ${ground.points} points are left out, more than a fifth`
  const { first, now } = ground
  if (first?.se && now && Math.abs(now.value - first.value) > 2 * first.se) {
    return `the slope moved by ${(Math.abs(now.value - first.value) / first.se).toFixed(1)} standard errors from the first version`
  }
  return null
}

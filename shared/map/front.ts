/** The front as a step line through its agents by rising loss, with the ends where it only runs on. */
import type { Point } from './geometry'

export interface FrontMark { readonly point: Point, readonly solid: boolean }
export interface FrontPiece { readonly from: Point, readonly to: Point, readonly look: 'solid' | 'unsure' | 'runsOn' }

/**
 * From each agent level to the loss of the next, then down to it. A piece is solid where the agent it leaves or reaches stays unbeaten with every bound taken
 * against it. At both ends the front runs on: straight up from the first agent, level from the last.
 */
export function frontPieces(marks: readonly FrontMark[], ends: { top: number, right: number }): FrontPiece[] {
  const sorted = [...marks].sort((a, b) => a.point[0] - b.point[0] || b.point[1] - a.point[1])
  const [first, last] = [sorted[0], sorted.at(-1)]
  if (!first || !last) return []
  const look = (solid: boolean): FrontPiece['look'] => solid ? 'solid' : 'unsure'
  const steps = sorted.slice(1).flatMap((mark, at): FrontPiece[] => {
    const before = sorted[at]!
    const corner: Point = [mark.point[0], before.point[1]]
    return [{ from: before.point, to: corner, look: look(before.solid) }, { from: corner, to: mark.point, look: look(mark.solid) }]
  })
  return [
    { from: [first.point[0], ends.top], to: first.point, look: 'runsOn' }, ...steps,
    { from: last.point, to: [ends.right, last.point[1]], look: 'runsOn' },
  ]
}

/** The strips at the edges for agents that lack a measurement: right without a loss, top without a working concentration, corner with neither. */
import type { ScreeningProfile } from '../science/placement/profile'
import type { Placement } from '../science/placement/types'
import { placeOf, type Plane } from './axes'
import type { Box, Point } from './geometry'
import { spread } from './labels'
import { lackOf } from './words'

export interface LaneMark {
  readonly id: string, readonly code: string, readonly lane: 'lossMissing' | 'concentrationMissing' | 'neither'
  readonly topology: Placement['topology'], readonly mechanism: Placement['mechanism'], readonly signed: boolean, readonly isFaint: boolean
  readonly at: Point
  /** True place along the edge, for the tick that leads to the plane. */
  readonly true_px: number
  /** Where its name stands; a thin line leads there when it is not beside the mark. */
  readonly nameAt: Point
  /** What it lacks; null where there is no room for it. */
  readonly lack: string | null
}
export interface LaneLayout { readonly right: Box, readonly top: Box, readonly corner: Box, readonly marks: readonly LaneMark[], /** Agents of the corner that found no room there. */ readonly cornerRest: number }
interface LaneFrame { plane: Plane, area: Box, width: number, profile: ScreeningProfile }

const GAP_px = 14
const TOP_px = { y: 8, height: 34 } as const
const NAME_AFTER_MARK_px = 13
const TOP_TITLE_px = 178
const ROW_px = 30
const MOST_IN_CORNER = 2
const CORNER_STEP_px = 70

export function layoutLanes(placements: readonly Placement[], { plane, area, width, profile }: LaneFrame): LaneLayout {
  const right: Box = { x: area.x + area.w + GAP_px, y: area.y, w: Math.max(0, width - area.x - area.w - 2 * GAP_px), h: area.h }
  const top: Box = { x: area.x, y: TOP_px.y, w: area.w, h: TOP_px.height }
  const corner: Box = { x: right.x, y: TOP_px.y, w: right.w, h: TOP_px.height }
  const within = (lane: Placement['lane']): Placement[] => placements.filter(p => p.lane === lane)
  const shared = (p: Placement) => ({ id: p.complexId, code: p.code, topology: p.topology, mechanism: p.mechanism, signed: p.signed, isFaint: !p.eligibleMechanism })
  return {
    right, top, corner, cornerRest: Math.max(0, within('neither').length - MOST_IN_CORNER),
    marks: [
      ...rightMarks(within('lossMissing'), plane, right).map(({ p, at, nameAt }) => ({ ...shared(p), lane: 'lossMissing' as const, at, true_px: at[1], nameAt, lack: lackOf(p, profile) })),
      ...topMarks(within('concentrationMissing'), plane, top).map(({ p, at, true_px, nameAt, hasRoom }) => ({ ...shared(p), lane: 'concentrationMissing' as const, at, true_px, nameAt, lack: hasRoom ? lackOf(p, profile) : null })),
      ...within('neither').slice(0, MOST_IN_CORNER).map((p, i) => {
        const at: Point = [corner.x + 14 + i * CORNER_STEP_px, corner.y + 25]
        return { ...shared(p), lane: 'neither' as const, at, true_px: at[0], nameAt: [at[0] + NAME_AFTER_MARK_px, at[1]] as const, lack: null }
      }),
    ],
  }
}

/** Marks at their true height; names apart enough to be read. */
function rightMarks(placements: readonly Placement[], plane: Plane, box: Box): { p: Placement, at: Point, nameAt: Point }[] {
  const heights = placements.map(p => placeOf(plane.y, p.workingConc_mM!.value).px)
  const names = spread(heights, ROW_px, [box.y + 56, box.y + box.h - 18])
  return placements.map((p, i) => ({ p, at: [box.x + 18, heights[i]!], nameAt: [box.x + 18 + NAME_AFTER_MARK_px + 3, names[i]!] }))
}

/** Marks as near to their true place across as the title of the lane and one another allow; a tick stands at the true place. */
function topMarks(placements: readonly Placement[], plane: Plane, box: Box): { p: Placement, at: Point, true_px: number, nameAt: Point, hasRoom: boolean }[] {
  const wanted = placements.map(p => placeOf(plane.x, p.loss_frac!.value).px)
  const room = (box.w - TOP_TITLE_px) / Math.max(1, placements.length)
  const hasRoom = room > 190
  const gap = hasRoom ? 190 : 76
  const names = spread(wanted, gap, [box.x + TOP_TITLE_px, box.x + box.w - gap + 14])
  return placements.map((p, i) => {
    const y = box.y + 15
    return { p, at: [names[i]!, y], true_px: wanted[i]!, nameAt: [names[i]! + NAME_AFTER_MARK_px, y], hasRoom }
  })
}

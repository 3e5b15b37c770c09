/** The whole map as shapes and words at given pixels. Pure: the same placements and the same size give the same drawing on server and browser. */
import type { ScreeningProfile } from '../science/placement/profile'
import type { Placement } from '../science/placement/types'
import { planeDomain, type Plane } from './axes'
import { boxAround, boxOfLine, type Box } from './geometry'
import { frontPieces, type FrontPiece } from './front'
import { grainOf, slideRule, type Grain, type RuleTick } from './grain'
import { placeLabels, type LabelWish } from './labels'
import { layoutLanes, type LaneLayout } from './lanes'
import { limitLines, type LimitLine } from './limitLines'
import { layoutMarks, type MarkLayout } from './marks'
import { limitsOver } from './words'

export interface PlaneOptions {
  readonly width: number
  readonly height: number
  /** A small plane for phones: no lanes, names of the front only. */
  readonly isSmall: boolean
  readonly chosenId: string | null
  readonly shortlist: readonly string[]
  /** Mechanism written after each name. */
  readonly writesMechanism: boolean
}
export interface PlaneLayout {
  readonly width: number, readonly height: number
  readonly area: Box
  readonly plane: Plane
  readonly grain: Grain
  readonly rule: readonly RuleTick[]
  readonly limits: readonly LimitLine[]
  readonly front: readonly FrontPiece[]
  readonly marks: readonly MarkLayout[]
  readonly lanes: LaneLayout | null
}

/** Above so many agents only the front, the shortlist and the chosen one are named. */
const MOST_NAMED = 40
const MARK_HALF_px = 10
const NAME_HEIGHT_px = 15
const FAULT_HEIGHT_px = 14
const NAME_px_PER_LETTER = 7.4
const FAULT_px_PER_LETTER = 6.1
const PENNANT_px = 13

export function layoutPlane(placements: readonly Placement[], profile: ScreeningProfile, options: PlaneOptions): PlaneLayout {
  const area = areaOf(options)
  const domain = planeDomain(placements, profile)
  const plane: Plane = {
    x: { low: domain.loss[0], high: domain.loss[1], from_px: area.x, to_px: area.x + area.w },
    y: { low: domain.conc[0], high: domain.conc[1], from_px: area.y + area.h, to_px: area.y },
  }
  const marks = layoutMarks(placements.filter(p => p.lane === 'plane'), plane, options)
  const limits = limitLines(plane, profile)
  const front = frontPieces(marks.filter(mark => mark.onFront).map(mark => ({ point: mark.at, solid: mark.frontSolid })), { top: area.y, right: area.x + area.w })
  const placed = placeLabels(marks.filter(mark => isNamed(mark, marks.length, options)).map(mark => wishOf(mark, options)), [
    ...marks.map(mark => boxAround(mark.at, MARK_HALF_px)), ...front.map(piece => boxOfLine(piece.from, piece.to)), ...limits.flatMap(limit => limitBoxes(limit, options)),
  ], area)
  return {
    width: options.width, height: options.height, area, plane, grain: grainOf(plane), rule: slideRule(plane, options.isSmall ? 62 : 56), limits, front,
    marks: marks.map(mark => ({ ...mark, label: placed.get(mark.id) ?? null })),
    lanes: options.isSmall ? null : layoutLanes(placements, { plane, area, width: options.width, profile }),
  }
}

function areaOf({ width, height, isSmall }: PlaneOptions): Box {
  const [left, right, top, bottom] = isSmall ? [44, 12, 34, 46] : [62, 178, 78, 48]
  return { x: left, y: top, w: Math.max(120, width - left - right), h: Math.max(120, height - top - bottom) }
}

function isNamed(mark: MarkLayout, count: number, { isSmall, shortlist, chosenId }: PlaneOptions): boolean {
  if (!isSmall && count <= MOST_NAMED) return true
  return mark.onFront || mark.id === chosenId || shortlist.includes(mark.id)
}

function wishOf(mark: MarkLayout, { isSmall, writesMechanism, shortlist, chosenId }: PlaneOptions): LabelWish {
  const name = mark.code.length * NAME_px_PER_LETTER + (writesMechanism ? mark.mechanism.length * 7 + 6 : 0) + (mark.id === chosenId ? 12 : 0)
  const fault = isSmall ? 0 : mark.faults.length > 0 ? PENNANT_px + mark.faults.join(', ').length * FAULT_px_PER_LETTER : 0
  const rank = mark.id === chosenId ? 0 : shortlist.includes(mark.id) ? 1 : mark.onFront ? 2 : mark.isFaint ? 5 : mark.signed ? 3 : 4
  return { id: mark.id, at: mark.at, w: Math.ceil(Math.max(name, fault)), h: NAME_HEIGHT_px + (fault > 0 ? FAULT_HEIGHT_px : 0) + (mark.id === chosenId ? 4 : 0), rank }
}

/** Words along a limit are obstacles too: a turned one as a row of small boxes. */
function limitBoxes(limit: LimitLine, { isSmall }: PlaneOptions): Box[] {
  const length = (isSmall ? limit.short : limit.words).length * 5.8
  const [x, y] = limit.labelAt
  if (limit.turn === 0) return [{ x: x - length, y: y - 11, w: length, h: 14 }]
  const [cos, sin] = [Math.cos(limit.turn * Math.PI / 180), Math.sin(limit.turn * Math.PI / 180)]
  const steps = Math.ceil(length / 12)
  return Array.from({ length: steps + 1 }, (_, at) => {
    const along = (at / steps - 0.5) * length
    return boxAround([x + along * cos, y + along * sin], 7)
  })
}

/** What a mark says to readers. */
export function markWords(placement: Placement, readings: { conc: string, loss: string }): string {
  const over = limitsOver(placement)
  return [
    placement.code, placement.mechanism, placement.topology === 'ring' ? 'ring ligand' : 'open chain', placement.signed ? 'signed' : 'not signed',
    `working concentration ${readings.conc}`, `loss ${readings.loss}`, placement.onFront ? 'on the front' : '', over.length > 0 ? `over: ${over.join(', ')}` : '',
  ].filter(Boolean).join(', ')
}

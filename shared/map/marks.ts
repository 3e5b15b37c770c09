/** Where each mark stands in the plane and what hangs on it. */
import type { BoundArrow, Placement } from '../science/placement/types'
import { placeOf, type Plane } from './axes'
import { ellipsePath, type Point } from './geometry'
import { metalPowerAt } from './grain'
import type { PlacedLabel } from './labels'
import { limitsOver } from './words'

export interface Stem { readonly to_px: number, readonly isBound: boolean, readonly runsOut: boolean }
export interface MarkLayout {
  readonly id: string
  readonly code: string
  readonly at: Point
  readonly topology: Placement['topology']
  readonly mechanism: Placement['mechanism']
  readonly signed: boolean
  /** Of another mechanism than the profile: context only. */
  readonly isFaint: boolean
  readonly isChosen: boolean
  readonly isShortlisted: boolean
  /** Cannot be told apart at 95 % from the chosen one. */
  readonly isLikeChosen: boolean
  readonly onFront: boolean
  readonly frontSolid: boolean
  /** Limits it is over, in short words. */
  readonly faults: readonly string[]
  readonly ellipse68: string | null
  /** For the chosen mark only. */
  readonly ellipse95: string | null
  readonly stem: Stem | null
  /** Fraction still bound at equilibrium; null where it is not known. */
  readonly bound_frac: number | null
  readonly arrows: readonly BoundArrow[]
  /** Values that lie beyond an end of an axis stand at that end with an arrow. */
  readonly beyond: readonly ('left' | 'right' | 'up' | 'down')[]
  /** Heights of the single series where they disagree. */
  readonly split: readonly number[]
  /** Power of ten of the unbound metal under the mark, for the colour behind its name. */
  readonly metalPower: number
  readonly label: PlacedLabel | null
}

const LEAST_STEM_px = 3

export function layoutMarks(placements: readonly Placement[], plane: Plane, { chosenId, shortlist }: { chosenId: string | null, shortlist: readonly string[] }): MarkLayout[] {
  const chosen = placements.find(p => p.complexId === chosenId)
  return placements.flatMap((p) => {
    if (!p.loss_frac || !p.workingConc_mM) return []
    const [x, y] = [placeOf(plane.x, p.loss_frac.value), placeOf(plane.y, p.workingConc_mM.value)]
    const isChosen = p.complexId === chosenId
    return [{
      id: p.complexId, code: p.code, at: [x.px, y.px] as const, topology: p.topology, mechanism: p.mechanism, signed: p.signed, isFaint: !p.eligibleMechanism, isChosen,
      isShortlisted: shortlist.includes(p.complexId), isLikeChosen: chosen?.notDistinguishable.includes(p.complexId) ?? false, onFront: p.onFront, frontSolid: p.frontSolid, faults: limitsOver(p),
      ellipse68: p.ellipse68 && ellipsePath(p.ellipse68, plane), ellipse95: isChosen && p.ellipse95 ? ellipsePath(p.ellipse95, plane) : null,
      stem: stemOf(p, plane, x.px), bound_frac: p.tick?.bound_frac ?? null, arrows: p.arrows,
      beyond: [...(x.beyond ? [x.beyond === 'low' ? 'left' as const : 'right' as const] : []), ...(y.beyond ? [y.beyond === 'low' ? 'down' as const : 'up' as const] : [])],
      split: p.split.map(one => placeOf(plane.y, one.workingConc_mM).px), metalPower: metalPowerAt(plane, [x.px, y.px]), label: null,
    }]
  })
}

/** From the loss, which is the agent's, to the unbound fraction, which is the batch's. */
function stemOf({ stem }: Placement, plane: Plane, from_px: number): Stem | null {
  if (!stem) return null
  const end = placeOf(plane.x, stem.toUnbound_frac)
  return end.px - from_px < LEAST_STEM_px ? null : { to_px: end.px, isBound: stem.toIsBound, runsOut: end.beyond === 'high' }
}

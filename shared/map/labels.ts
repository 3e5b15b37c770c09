/** Greedy placement of labels: eight places around a mark, then the same further out; never over a mark, the front or another label. */
import { isInside, overlaps, type Box, type Point } from './geometry'

export interface LabelWish { readonly id: string, readonly at: Point, readonly w: number, readonly h: number, /** Lower comes first. */ readonly rank: number }
export interface PlacedLabel { readonly id: string, readonly box: Box, readonly side: 'start' | 'middle' | 'end' }

/** Distances from the centre of a mark to its label. */
const REACHES_px = [12, 19, 27] as const

/** The eight places around a mark, best first: right, above and below it on the right, above, below, left. */
function placesAround({ at: [x, y], w, h }: LabelWish, reach: number): { box: Box, side: PlacedLabel['side'] }[] {
  const [right, left, middle] = [x + reach, x - reach - w, x - w / 2]
  const near = reach - 3
  const place = (side: PlacedLabel['side'], bx: number, by: number) => ({ side, box: { x: bx, y: by, w, h } })
  return [
    place('start', right, y - h / 2), place('start', x + near, y - h - near + 3), place('start', x + near, y + near - 3), place('middle', middle, y - reach - h),
    place('middle', middle, y + reach), place('end', left, y - h / 2), place('end', x - near - w, y - h - near + 3), place('end', x - near - w, y + near - 3),
  ]
}

/**
 * Places labels in order of rank. One that fits nowhere is left out: the mark still has its name for readers, in the table and when pointed at.
 * @param obstacles boxes of all marks, of the front and of words that stand already
 */
export function placeLabels(wishes: readonly LabelWish[], obstacles: readonly Box[], bounds: Box): Map<string, PlacedLabel> {
  const taken = [...obstacles]
  const placed = new Map<string, PlacedLabel>()
  for (const wish of [...wishes].sort((a, b) => a.rank - b.rank || (a.id < b.id ? -1 : 1))) {
    const found = REACHES_px.flatMap(reach => placesAround(wish, reach)).find(({ box }) => isInside(box, bounds) && !taken.some(one => overlaps(one, box)))
    if (!found) continue
    taken.push(found.box)
    placed.set(wish.id, { id: wish.id, ...found })
  }
  return placed
}

/** Places along a line, each as near to where it belongs as a least gap allows; closer where there is no room for all. */
export function spread(wanted: readonly number[], gap: number, [low, high]: readonly [number, number]): number[] {
  const order = wanted.map((value, at) => ({ value, at })).sort((a, b) => a.value - b.value || a.at - b.at)
  const step = order.length > 1 ? Math.min(gap, (high - low) / (order.length - 1)) : 0
  const places = order.map(one => Math.min(high, Math.max(low, one.value)))
  for (let i = 1; i < places.length; i++) places[i] = Math.max(places[i]!, places[i - 1]! + step)
  if (places.length > 0) places[places.length - 1] = Math.min(places.at(-1)!, high)
  for (let i = places.length - 2; i >= 0; i--) places[i] = Math.min(places[i]!, places[i + 1]! - step)
  const result: number[] = []
  order.forEach((one, i) => { result[one.at] = places[i]! })
  return result
}

/** From mark to mark by arrow key. */
import type { Point } from './geometry'

export const DIRECTIONS = { ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, -1], ArrowDown: [0, 1] } as const
export type Direction = keyof typeof DIRECTIONS
export interface Standing { readonly id: string, readonly at: Point }

/** How much a pixel aside counts against a pixel forward. */
const ASIDE = 2

/** The mark to go to from `from`: the nearest one that lies that way, straight ahead before aside. Null where nothing lies that way. */
export function nearestMark(marks: readonly Standing[], from: Standing, direction: Direction): string | null {
  const [dx, dy] = DIRECTIONS[direction]
  const ways = marks.filter(one => one.id !== from.id).map((one) => {
    const [x, y] = [one.at[0] - from.at[0], one.at[1] - from.at[1]]
    return { id: one.id, ahead: x * dx + y * dy, aside: Math.abs(x * dy) + Math.abs(y * dx) }
  }).filter(one => one.ahead > 0)
  // within 45° first, so that a mark far aside is taken only where nothing lies ahead
  const straight = ways.filter(one => one.aside <= one.ahead)
  const best = (straight.length > 0 ? straight : ways).sort((a, b) => a.ahead + ASIDE * a.aside - (b.ahead + ASIDE * b.aside) || (a.id < b.id ? -1 : 1))[0]
  return best?.id ?? null
}

import type { StructureDrawing } from '../schemas/structure'

type Drawing = StructureDrawing
interface Point { x: number, y: number }
export interface BondLine { from: Point, to: Point }
export interface BondWedge { points: readonly [Point, Point, Point], isSolid: boolean }

/** Room around a letter, in bond lengths. */
const LETTER_GAP = 0.28
/** Distance of the two lines of a double bond. */
const DOUBLE_GAP = 0.14
const WEDGE_HALF = 0.12

/** The lines and wedges of a structure, cut short where a letter stands. Lengths in bond lengths, as the drawing has them. */
export function bondLines(drawing: Drawing): { lines: BondLine[], wedges: BondWedge[] } {
  const lines: BondLine[] = []
  const wedges: BondWedge[] = []
  for (const bond of drawing.bonds) {
    const [a, b] = ends(drawing, bond)
    if (bond.wedge !== 'none') wedges.push(wedgeBetween(a, b, bond.wedge === 'up'))
    else lines.push(...parallel(a, b, bond))
  }
  return { lines, wedges }
}

function ends({ atoms }: Drawing, bond: Drawing['bonds'][number]): [Point, Point] {
  const [a, b] = [atoms[bond.from]!, atoms[bond.to]!]
  const length = Math.hypot(b.x - a.x, b.y - a.y) || 1
  const cut = (atom: Drawing['atoms'][number]): number => (atom.isShown ? Math.min(LETTER_GAP, 0.4 * length) / length : 0)
  return [
    { x: a.x + (b.x - a.x) * cut(a), y: a.y + (b.y - a.y) * cut(a) },
    { x: b.x + (a.x - b.x) * cut(b), y: b.y + (a.y - b.y) * cut(b) },
  ]
}

/** A single line, two beside each other, or three. The second line of a ring's double bond lies inside and is a little shorter. */
function parallel(a: Point, b: Point, { order, inner }: Drawing['bonds'][number]): BondLine[] {
  const length = Math.hypot(b.x - a.x, b.y - a.y) || 1
  const across = { x: -(b.y - a.y) / length, y: (b.x - a.x) / length }
  const moved = (by: number, shorten = 0): BondLine => ({
    from: { x: a.x + across.x * by + (b.x - a.x) * shorten, y: a.y + across.y * by + (b.y - a.y) * shorten },
    to: { x: b.x + across.x * by - (b.x - a.x) * shorten, y: b.y + across.y * by - (b.y - a.y) * shorten },
  })
  if (order === 2 && inner === 'middle') return [moved(-DOUBLE_GAP / 2), moved(DOUBLE_GAP / 2)]
  if (order === 2) return [moved(0), moved(inner === 'right' ? DOUBLE_GAP : -DOUBLE_GAP, 0.12)]
  return order === 3 ? [moved(0), moved(DOUBLE_GAP), moved(-DOUBLE_GAP)] : [moved(0)]
}

function wedgeBetween(a: Point, b: Point, isSolid: boolean): BondWedge {
  const length = Math.hypot(b.x - a.x, b.y - a.y) || 1
  const across = { x: -(b.y - a.y) / length * WEDGE_HALF, y: (b.x - a.x) / length * WEDGE_HALF }
  return { points: [a, { x: b.x + across.x, y: b.y + across.y }, { x: b.x - across.x, y: b.y - across.y }], isSolid }
}

/**
 * The grain of the map: bands between diagonals of equal unbound metal at the working concentration, one per decade, read on the top edge.
 * With loss across and concentration up, both logarithmic, conc·fraction = constant is a straight line.
 */
import { pixelOf, powerAt, type Plane } from './axes'
import { path, type Point } from './geometry'

/** From mM times a fraction to mol/L, in decades. */
const MILLI = 3

/** Power of ten of the unbound metal in mol/L at a point. */
export const metalPowerAt = (plane: Plane, [x, y]: Point): number => powerAt(plane.x, x) + powerAt(plane.y, y) - MILLI

/** The diagonal of one unbound concentration (power of ten of mol/L), from the left edge to the right edge, where it may leave the plane. */
export function diagonal(plane: Plane, metalPower: number): readonly [Point, Point] {
  const end = (lossPower: number): Point => [pixelOf(plane.x, lossPower), pixelOf(plane.y, metalPower + MILLI - lossPower)]
  return [end(plane.x.low), end(plane.x.high)]
}

export interface Band { readonly power: number, readonly area: string, readonly share: number }
export interface Grain { readonly bands: readonly Band[], readonly lines: readonly { power: number, from: Point, to: Point }[], readonly least: number, readonly most: number }

/** Bands from little unbound metal (lower left) to much (upper right); `share` runs from 0 to 1 and says how far the light has fallen. Each band lies over the one before. */
export function grainOf(plane: Plane): Grain {
  const least = Math.floor(plane.x.low + plane.y.low - MILLI)
  const most = Math.ceil(plane.x.high + plane.y.high - MILLI)
  const powers = Array.from({ length: most - least }, (_, at) => least + at)
  const [right, top] = [plane.x.to_px, plane.y.to_px]
  return {
    least, most,
    bands: powers.map((power) => {
      const [from, to] = diagonal(plane, power)
      const far: Point = [Math.max(right, to[0]), Math.min(top, from[1])]
      return { power, share: shareOf({ least, most }, power), area: path([from, to, [far[0], to[1]], far, [from[0], far[1]]], true) }
    }),
    lines: powers.slice(1).map((power) => {
      const [from, to] = diagonal(plane, power)
      return { power, from, to }
    }),
  }
}

/** How far the light has fallen in the band of one decade, 0 to 1. */
export function shareOf({ least, most }: Pick<Grain, 'least' | 'most'>, power: number): number {
  const steps = Math.max(1, most - least - 1)
  return Math.min(1, Math.max(0, (Math.floor(power) - least) / steps))
}

export interface RuleTick { readonly px: number, readonly power: number, readonly words: string }

/** Where the diagonals meet the top edge: a slide rule of unbound metal. */
export function slideRule(plane: Plane, least_px: number): RuleTick[] {
  const { least, most } = grainOf(plane)
  const px_per_decade = (plane.x.to_px - plane.x.from_px) / (plane.x.high - plane.x.low)
  const every = Math.max(1, Math.ceil(least_px / px_per_decade))
  return Array.from({ length: most - least + 1 }, (_, at) => least + at).filter(power => power % every === 0)
    .map(power => ({ power, px: pixelOf(plane.x, power + MILLI - plane.y.high), words: metalWords(power) }))
    .filter(({ px }) => px >= plane.x.from_px && px <= plane.x.to_px)
}

const PREFIXES: readonly (readonly [number, string])[] = [[-3, 'mM'], [-6, 'µM'], [-9, 'nM'], [-12, 'pM'], [-15, 'fM'], [-18, 'aM']]
/** `10 nM` for -8. */
function metalWords(power: number): string {
  const [size, unit] = PREFIXES.find(([from]) => power >= from) ?? PREFIXES.at(-1)!
  return `${Number((10 ** (power - size)).toPrecision(3))}\u00A0${unit}`
}

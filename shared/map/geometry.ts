/** Points, boxes and paths of the map, in pixels. */
import type { EllipseParams } from '../science/placement/types'
import { pixelOf, type Plane } from './axes'

export type Point = readonly [number, number]
export interface Box { readonly x: number, readonly y: number, readonly w: number, readonly h: number }

export const overlaps = (a: Box, b: Box): boolean => a.x < b.x + b.w && b.x < a.x + a.w && a.y < b.y + b.h && b.y < a.y + a.h
export const isInside = (inner: Box, outer: Box): boolean => inner.x >= outer.x && inner.y >= outer.y && inner.x + inner.w <= outer.x + outer.w && inner.y + inner.h <= outer.y + outer.h
export const boxAround = ([x, y]: Point, half: number): Box => ({ x: x - half, y: y - half, w: 2 * half, h: 2 * half })

/** Box of a level or upright piece of line, with some air. */
export const boxOfLine = (a: Point, b: Point, air = 1): Box => ({
  x: Math.min(a[0], b[0]) - air, y: Math.min(a[1], b[1]) - air, w: Math.abs(a[0] - b[0]) + 2 * air, h: Math.abs(a[1] - b[1]) + 2 * air,
})

const written = (n: number): string => String(Math.round(n * 100) / 100)
export const path = (points: readonly Point[], closed = false): string => points.map(([x, y], at) => `${at ? 'L' : 'M'}${written(x)} ${written(y)}`).join('') + (closed ? 'Z' : '')

const CORNERS = 48
/** Least half axis in pixels: a narrower one could not be told from the mark. */
const LEAST_HALF_px = 9

/** Outline of a probability ellipse: a circle of unit size, stretched and turned in decades, then laid on the axes. */
export function ellipsePath(ellipse: EllipseParams, plane: Plane): string {
  const centre: Point = [pixelOf(plane.x, ellipse.centreLogLoss), pixelOf(plane.y, ellipse.centreLogConc)]
  const [cos, sin] = [Math.cos(ellipse.angle_rad), Math.sin(ellipse.angle_rad)]
  const around = Array.from({ length: CORNERS }, (_, at): Point => {
    const t = 2 * Math.PI * at / CORNERS
    const [a, b] = [ellipse.semiMajor_decades * Math.cos(t), ellipse.semiMinor_decades * Math.sin(t)]
    return [pixelOf(plane.x, ellipse.centreLogLoss + a * cos - b * sin) - centre[0], pixelOf(plane.y, ellipse.centreLogConc + a * sin + b * cos) - centre[1]]
  })
  const widest = Math.max(...around.map(([x]) => Math.abs(x)))
  const highest = Math.max(...around.map(([, y]) => Math.abs(y)))
  const stretch = (half: number): number => half === 0 ? 0 : Math.max(1, LEAST_HALF_px / half)
  return path(around.map(([x, y]) => [centre[0] + x * stretch(widest), centre[1] + y * stretch(highest)]), true)
}

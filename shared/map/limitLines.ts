/** The three limits that are lines in the plane: concentration, loss, and unbound metal at the working concentration. */
import type { ScreeningProfile } from '../science/placement/profile'
import { formatNumber } from '../format'
import { pixelOf, type Plane } from './axes'
import { path, type Point } from './geometry'
import { diagonal } from './grain'

export interface LimitLine {
  readonly key: 'workingConc' | 'loss' | 'unbound'
  readonly from: Point
  readonly to: Point
  /** Hatch along the line on the failing side. */
  readonly hatch: string
  readonly words: string
  readonly short: string
  readonly labelAt: Point
  /** Turn of the label about its place, degrees. */
  readonly turn: number
  readonly anchor: 'middle' | 'end'
}

const HATCH_px = 12

/** The limits that cross the plane; one that lies outside has no line. */
export function limitLines(plane: Plane, profile: ScreeningProfile): LimitLine[] {
  return [concLine(plane, profile.limitWorkingConc_mM), lossLine(plane, profile.limitLoss_frac), unboundLine(plane, profile.limitUnbound_uM)].filter(line => line !== null)
}

function concLine({ x, y }: Plane, limit: number): LimitLine | null {
  const power = Math.log10(limit)
  if (power <= y.low || power >= y.high) return null
  const at = pixelOf(y, power)
  return {
    key: 'workingConc', from: [x.from_px, at], to: [x.to_px, at], hatch: path([[x.from_px, at], [x.to_px, at], [x.to_px, at - HATCH_px], [x.from_px, at - HATCH_px]], true),
    words: `limit: working concentration ${formatNumber(limit)} mM`, short: `limit ${formatNumber(limit)} mM`, labelAt: [x.to_px - 8, at + 15], turn: 0, anchor: 'end',
  }
}

function lossLine({ x, y }: Plane, limit: number): LimitLine | null {
  const power = Math.log10(limit)
  if (power <= x.low || power >= x.high) return null
  const at = pixelOf(x, power)
  return {
    key: 'loss', from: [at, y.from_px], to: [at, y.to_px], hatch: path([[at, y.from_px], [at, y.to_px], [at + HATCH_px, y.to_px], [at + HATCH_px, y.from_px]], true),
    words: `limit: loss ${formatNumber(limit)}, upper 95 %`, short: `limit ${formatNumber(limit)}`, labelAt: [at - 6, y.from_px - 0.22 * (y.from_px - y.to_px)], turn: -90, anchor: 'middle',
  }
}

function unboundLine(plane: Plane, limit_uM: number): LimitLine | null {
  const metalPower = Math.log10(limit_uM) - 6
  const [from, to] = diagonal(plane, metalPower)
  const { x, y } = plane
  // where the diagonal is inside the plane: between its crossing of the top and of the bottom edge
  const enters = Math.max(x.low, metalPower + 3 - y.high)
  const leaves = Math.min(x.high, metalPower + 3 - y.low)
  if (leaves - enters < 0.3) return null
  const [dx, dy] = [to[0] - from[0], to[1] - from[1]]
  const length = Math.hypot(dx, dy)
  const aside = ([px, py]: Point, by: number): Point => [px + by * dy / length, py - by * dx / length]
  const labelPower = enters + 0.62 * (leaves - enters)
  const on: Point = [pixelOf(x, labelPower), pixelOf(y, metalPower + 3 - labelPower)]
  return {
    key: 'unbound', from, to, hatch: path([from, to, aside(to, HATCH_px), aside(from, HATCH_px)], true), words: `limit: ${formatNumber(limit_uM)} µM unbound`, short: `limit ${formatNumber(limit_uM)} µM`,
    labelAt: aside(on, -6), turn: Math.atan2(dy, dx) * 180 / Math.PI, anchor: 'middle',
  }
}

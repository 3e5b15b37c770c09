/** The two logarithmic axes of the map: from numbers to pixels, what they span, and where their ticks stand. */
import type { ScreeningProfile } from '../science/placement/profile'
import type { EllipseParams, Placement } from '../science/placement/types'

export interface LogAxis { readonly low: number, readonly high: number, readonly from_px: number, readonly to_px: number }

/** Loss across, concentration up. */
export interface Plane { readonly x: LogAxis, readonly y: LogAxis }

/** Ends of both axes as powers of ten. */
export interface PlaneDomain { readonly loss: readonly [number, number], readonly conc: readonly [number, number] }

const hundredth = (px: number): number => Math.round(px * 100) / 100

/** Pixel of a power of ten; beyond the ends it runs on. Rounded, because logarithms differ in their last bits between engines. */
export function pixelOf(axis: LogAxis, power: number): number {
  return hundredth(axis.from_px + (power - axis.low) / (axis.high - axis.low) * (axis.to_px - axis.from_px))
}

export interface AxisPlace { readonly px: number, readonly beyond: 'low' | 'high' | null }

/** Where a value stands; what lies beyond an end, zero included, stands at that end and says so. */
export function placeOf(axis: LogAxis, value: number): AxisPlace {
  const power = value > 0 ? Math.log10(value) : -Infinity
  if (power < axis.low) return { px: axis.from_px, beyond: 'low' }
  if (power > axis.high) return { px: axis.to_px, beyond: 'high' }
  return { px: pixelOf(axis, power), beyond: null }
}

/** Power of ten under a pixel. */
export const powerAt = (axis: LogAxis, px: number): number => axis.low + (px - axis.from_px) / (axis.to_px - axis.from_px) * (axis.high - axis.low)

/** Limits count for the span of an axis only when they lie this near to a mark, in decades. */
const NEAR_LIMIT_decades = 2
const LEAST_LOSS_decades = 3
const FRACTION_OF_ALL = 0

/** Spans that hold every mark, ellipse and stem, in whole decades across and in steps of 1, 2 and 5 up. */
export function planeDomain(placements: readonly Placement[], profile: ScreeningProfile): PlaneDomain {
  return { loss: lossSpan(placements, profile.limitLoss_frac), conc: concSpan(placements, profile.limitWorkingConc_mM) }
}

function lossSpan(placements: readonly Placement[], limit: number): [number, number] {
  const powers = powersOf(placements.flatMap(p => [p.loss_frac?.value, p.loss_frac && p.workingConc_mM ? p.stem?.toUnbound_frac : undefined]))
  const reach = ellipsesOf(placements).flatMap(e => [e.centreLogLoss - reachOf(e, 'loss'), e.centreLogLoss + reachOf(e, 'loss')])
  const [least, most] = spanOf([...powers, ...reach], Math.log10(limit), [-6, -3])
  const high = Math.min(FRACTION_OF_ALL, Math.ceil(most + 0.15))
  return [Math.min(Math.floor(least - 0.15), high - LEAST_LOSS_decades), high]
}

function concSpan(placements: readonly Placement[], limit: number): [number, number] {
  const powers = powersOf(placements.flatMap(p => [p.workingConc_mM?.value, ...p.split.map(one => one.workingConc_mM)]))
  const reach = ellipsesOf(placements).flatMap(e => [e.centreLogConc - reachOf(e, 'conc'), e.centreLogConc + reachOf(e, 'conc')])
  const [least, most] = spanOf([...powers, ...reach], Math.log10(limit), [-1, 1])
  return [stepBelow(least - 0.12), stepAbove(most + 0.12)]
}

const powersOf = (values: readonly (number | null | undefined)[]): number[] => values.flatMap(value => value !== null && value !== undefined && value > 0 && Number.isFinite(value) ? [Math.log10(value)] : [])
const ellipsesOf = (placements: readonly Placement[]): EllipseParams[] => placements.flatMap(p => p.ellipse68 ? [p.ellipse68] : [])

/** Half the width of an ellipse along one axis, decades. */
function reachOf({ semiMajor_decades: a, semiMinor_decades: b, angle_rad: t }: EllipseParams, axis: 'loss' | 'conc'): number {
  const [cos, sin] = [Math.cos(t), Math.sin(t)]
  return axis === 'loss' ? Math.hypot(a * cos, b * sin) : Math.hypot(a * sin, b * cos)
}

function spanOf(powers: readonly number[], limit: number, fallback: readonly [number, number]): [number, number] {
  if (powers.length === 0) return [Math.min(fallback[0], limit - 1), Math.max(fallback[1], limit + 1)]
  const [least, most] = [Math.min(...powers), Math.max(...powers)]
  const isNear = limit > least - NEAR_LIMIT_decades && limit < most + NEAR_LIMIT_decades
  return isNear ? [Math.min(least, limit), Math.max(most, limit)] : [least, most]
}

const STEPS = [1, 2, 5].map(Math.log10)
/** Largest of 1, 2, 5 times a power of ten at or below. */
function stepBelow(power: number): number {
  const decade = Math.floor(power)
  return decade + (STEPS.findLast(step => step <= power - decade + 1e-9) ?? 0)
}
function stepAbove(power: number): number {
  const decade = Math.floor(power)
  return decade + (STEPS.find(step => step >= power - decade - 1e-9) ?? 1)
}

export interface AxisTick { readonly px: number, readonly value: number, readonly power: number }

/** Ticks at 1, 2 and 5 of each decade; at the decades alone where those would stand closer than `least_px`. */
export function stepTicks(axis: LogAxis, least_px: number): AxisTick[] {
  const px_per_decade = Math.abs(axis.to_px - axis.from_px) / (axis.high - axis.low)
  const factors = px_per_decade * STEPS[1]! >= least_px ? [1, 2, 5] : [1]
  return decades(axis).flatMap(decade => factors.map(factor => ({ power: decade + Math.log10(factor), value: Number((factor * 10 ** decade).toPrecision(6)) })))
    .filter(({ power }) => power >= axis.low - 1e-9 && power <= axis.high + 1e-9).map(({ power, value }) => ({ px: pixelOf(axis, power), value, power }))
}

/** Decade ticks, every second or third where they would stand closer than `least_px`. */
export function decadeTicks(axis: LogAxis, least_px: number): AxisTick[] {
  const px_per_decade = Math.abs(axis.to_px - axis.from_px) / (axis.high - axis.low)
  const every = Math.max(1, Math.ceil(least_px / px_per_decade))
  return decades(axis).filter(decade => decade % every === 0 && decade >= axis.low - 1e-9 && decade <= axis.high + 1e-9)
    .map(decade => ({ px: pixelOf(axis, decade), value: 10 ** decade, power: decade }))
}

const decades = (axis: LogAxis): number[] => {
  const first = Math.floor(axis.low)
  return Array.from({ length: Math.ceil(axis.high) - first + 1 }, (_, at) => first + at)
}

import { createPchip, type Pchip } from './pchip'
import { refuseExchange, type ExchangeRefusal } from './refusal'

/** Where the water resonance stands on the axis of the offsets, and how that was found. */
export interface WaterShift {
  readonly ok: true
  readonly method: 'wassr' | 'waterDip' | 'none'
  /** Position of water; the spectrum is moved by its negative. */
  readonly shift_ppm: number
  /** Standard error; null where nothing says how good it is (no correction, or no noise). */
  readonly se_ppm: number | null
  /** Points whose mirror image was compared. */
  readonly points: number
  /** Root mean square of the difference to the mirror image, over what the noise would give; null without a noise. About 1 for a symmetric dip. */
  readonly asymmetry: number | null
}

export interface DipData {
  /** Ascending, each once. */
  readonly offset_ppm: readonly number[]
  readonly z: readonly number[]
  /** Standard error of each point; null = the difference to the mirror image stands in for it. */
  readonly zSe: readonly number[] | null
}

/** No correction: water is taken to stand at 0. Its error is not known. */
export const noShift: WaterShift = { ok: true, method: 'none', shift_ppm: 0, se_ppm: null, points: 0, asymmetry: null }

/**
 * Centre of a water dip as the axis about which it is most nearly its own mirror image: least mean square of S(x) − S(2c − x), the mirror image by monotone
 * cubic interpolation. The standard error is σ/√ΣS′(x)² over the points compared, the least that any unbiased centre of a symmetric dip can have.
 * @source Kim, Gillen, Landman, Zhou, van Zijl, Magn. Reson. Med. 61, 1441 (2009)
 */
export function shiftBySymmetry(data: DipData): WaterShift | ExchangeRefusal {
  return refuseDip(data) ?? findCentre(data, 'wassr')
}

/** The same for the dip of a spectrum itself: only points of its lower half and two steps beyond are compared, so that pools beside the water do not pull. */
export function shiftByWaterDip(data: DipData): WaterShift | ExchangeRefusal {
  return refuseDip(data) ?? findCentre(data, 'waterDip')
}

function findCentre(data: DipData, method: 'wassr' | 'waterDip'): WaterShift | ExchangeRefusal {
  const { offset_ppm: x, z } = data
  const dip = lowerHalf(x, z)
  // the scan must hold the mirror image wherever the centre is looked for
  const reach = Math.min(dip.centre - x[0]!, x.at(-1)! - dip.centre) - 2 * dip.step
  const half = method === 'wassr' ? reach : Math.min(reach, dip.halfWidth + 2 * dip.step)
  const inside = x.flatMap((at, i) => Math.abs(at - dip.centre) <= half ? [i] : [])
  if (!(half > 0) || inside.length < 6) {
    return method === 'wassr' || !(reach > dip.halfWidth)
      ? refuseExchange('dipAtEdge', `The dip, at about ${Number(dip.centre.toFixed(2))} ppm, is too near the end of the scan: its mirror image leaves the data.`, 'A scan that reaches as far beyond the water on one side as on the other, at least six points.')
      : refuseExchange('waterDipTooCoarse', `The water dip of the spectrum has ${inside.length} points in its lower half.`, 'Six points or more across the water dip, a scan for the water shift, or no correction.')
  }
  const pchip = createPchip(x, z)
  const objective = (c: number) => inside.reduce((sum, i) => sum + (z[i]! - pchip.at(2 * c - x[i]!)) ** 2, 0)
  const centre = leastOn(objective, dip.centre - dip.step, dip.centre + dip.step)
  return describeCentre({ data, pchip, inside, centre, mismatch: objective(centre) }, method)
}

/** Where a dip crosses half its depth on both sides of its lowest point: the middle is a first centre that noise at a flat bottom does not move. */
function lowerHalf(x: readonly number[], z: readonly number[]): { centre: number, halfWidth: number, step: number } {
  const lowest = z.indexOf(Math.min(...z))
  const level = (Math.min(...z) + Math.max(...z)) / 2
  const crossing = (direction: 1 | -1): number => {
    let i = lowest
    while (i + direction >= 0 && i + direction < x.length && z[i]! < level) i += direction
    const before = i - direction
    return z[i]! < level || i === lowest ? x[i]! : x[before]! + ((level - z[before]!) / (z[i]! - z[before]!)) * (x[i]! - x[before]!)
  }
  const [left, right] = [crossing(-1), crossing(1)]
  const within = x.flatMap((at, i) => i > 0 && at > left && x[i - 1]! < right ? [at - x[i - 1]!] : [])
  return { centre: (left + right) / 2, halfWidth: (right - left) / 2, step: Math.max(...within) }
}

function refuseDip({ offset_ppm, z }: DipData): ExchangeRefusal | null {
  if (offset_ppm.length < 7) return refuseExchange('tooFewPoints', `The scan for the water shift has ${offset_ppm.length} different offsets.`, 'Seven offsets or more across the water.')
  const [low, high] = [Math.min(...z), Math.max(...z)]
  if (!Number.isFinite(low) || !Number.isFinite(high)) return refuseExchange('notFinite', 'The scan for the water shift holds values that are no numbers.', 'Finite signals.')
  if (!(high - low > 0.1 * Math.abs(high))) return refuseExchange('noDip', `The scan has no dip: its signal stays between ${low.toPrecision(3)} and ${high.toPrecision(3)}.`, 'A scan whose lowest point is at least a tenth below its highest.')
  return null
}

/** Least value of a function on an interval: a grid, because noise makes shallow side minima, then golden sections about its best point. */
function leastOn(objective: (c: number) => number, from: number, to: number): number {
  const GRID = 48
  const grid = Array.from({ length: GRID + 1 }, (_, g) => from + (g / GRID) * (to - from))
  const values = grid.map(objective)
  const best = values.indexOf(Math.min(...values))
  let [low, high] = [grid[Math.max(0, best - 1)]!, grid[Math.min(GRID, best + 1)]!]
  const GOLDEN = (Math.sqrt(5) - 1) / 2
  for (let turn = 0; turn < 40; turn++) {
    const [a, b] = [high - GOLDEN * (high - low), low + GOLDEN * (high - low)]
    if (objective(a) <= objective(b)) high = b
    else low = a
  }
  return (low + high) / 2
}

interface Found { readonly data: DipData, readonly pchip: Pchip, readonly inside: readonly number[], readonly centre: number, readonly mismatch: number }

function describeCentre({ data, pchip, inside, centre, mismatch }: Found, method: 'wassr' | 'waterDip'): WaterShift {
  const { offset_ppm: x, zSe } = data
  const slopes = inside.reduce((sum, i) => sum + pchip.slopeAt(x[i]!) ** 2, 0)
  const share = inside.reduce((sum, i) => sum + 1 + interpolatedShare(x, 2 * centre - x[i]!), 0)
  const seen = Math.sqrt(mismatch / share)
  const given = zSe === null ? null : Math.sqrt(inside.reduce((sum, i) => sum + zSe[i]! ** 2, 0) / inside.length)
  // a mismatch above the noise is asymmetry, and widens the error
  const sigma = Math.max(seen, given ?? 0)
  return { ok: true, method, shift_ppm: centre, se_ppm: sigma > 0 && slopes > 0 ? sigma / Math.sqrt(slopes) : null, points: inside.length, asymmetry: given === null || given === 0 ? null : seen / given }
}

/** Variance of an interpolated value over that of a point, for a chord between the two neighbours. */
function interpolatedShare(x: readonly number[], at: number): number {
  const next = x.findIndex(one => one >= at)
  if (next <= 0) return 1
  const t = (at - x[next - 1]!) / (x[next]! - x[next - 1]!)
  return t * t + (1 - t) * (1 - t)
}

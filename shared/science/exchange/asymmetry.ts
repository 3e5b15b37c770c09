import { createPchip } from './pchip'
import { refuseExchange, type ExchangeRefusal } from './refusal'

/** A spectrum ready to be read at any offset: normalised, its offsets counted from the water. */
export interface CentredSpectrum {
  /** Ascending, counted from the water. */
  readonly offset_ppm: readonly number[]
  readonly z: readonly number[]
  readonly zSe: readonly number[] | null
  readonly s0RelativeSe: number | null
  /** Standard error of the position of water; null = not known. */
  readonly shiftSe_ppm: number | null
}

/** A value with its standard error, null where nothing says how good it is. */
export interface WithError { readonly value: number, readonly se: number | null }

/** A spectrum read at one offset and at its mirror image. */
export interface MirrorReading {
  readonly ok: true
  readonly offset_ppm: number
  /** Z at the offset. */
  readonly lab: WithError
  /** Z at the mirrored offset. */
  readonly ref: WithError
  /** Z(−Δω) − Z(+Δω). */
  readonly mtrAsym: WithError
  /** 1 − Z(+Δω)/Z(−Δω), the proton transfer ratio with direct saturation divided out. */
  readonly ptr: WithError
  /** 1/Z(+Δω) − 1/Z(−Δω). */
  readonly mtrRex: WithError
  /**
   * How far Z at the offset hangs on the way of interpolation: the cubic through the four nearest points less the monotone one, which never dips below its points. 0 at a measured
   * offset; null at the ends of the data.
   */
  readonly interpolation: number | null
}

type Measure = (lab: number, ref: number) => number

/**
 * Reads a spectrum at an offset and at its mirror image, by monotone cubic interpolation. Errors hold the noise of the points, of S0 (shared by both sides), the
 * error of the water position, and what two ways of interpolation differ by.
 * @param offset_ppm the pool's own signed offset, from water
 * @returns a refusal where one of the two leaves the data
 * @source MTR_Rex: Zaiss et al., Magn. Reson. Med. 79, 1708 (2018)
 */
export function readMirrored(spectrum: CentredSpectrum, offset_ppm: number): MirrorReading | ExchangeRefusal {
  const { offset_ppm: x, z } = spectrum
  const missing = [offset_ppm, -offset_ppm].find(at => !(at >= x[0]! && at <= x.at(-1)!))
  if (missing !== undefined) return refuseExchange('outsideSpectrum', `The spectrum runs from ${x[0]!.toFixed(2)} to ${x.at(-1)!.toFixed(2)} ppm from water and does not hold ${missing.toFixed(2)} ppm.`, 'Offsets on both sides of water, as far out as the pool.')
  const pchip = createPchip(x, z)
  const [lab, ref] = [pchip.at(offset_ppm), pchip.at(-offset_ppm)]
  const errorOf = errorsAt(spectrum, offset_ppm)
  const cubic = cubicAt(x, z, offset_ppm)
  const withError = (measure: Measure): WithError => ({ value: measure(lab, ref), se: errorOf(measure) })
  const positive = lab > 0 && ref > 0
  if (!positive) return refuseExchange('saturated', `Z is ${lab.toPrecision(2)} at the pool and ${ref.toPrecision(2)} opposite: nothing is left to compare.`, 'Weaker or shorter saturation, or a pool farther from water.')
  return {
    ok: true, offset_ppm, interpolation: cubic === null ? null : cubic - lab, lab: withError(a => a), ref: withError((_, b) => b), mtrAsym: withError((a, b) => b - a), ptr: withError((a, b) => 1 - a / b), mtrRex: withError((a, b) => 1 / a - 1 / b),
  }
}

/** Value of the cubic through the two points on either side; null where there are not two. */
function cubicAt(x: readonly number[], y: readonly number[], at: number): number | null {
  const next = x.findIndex(one => one >= at)
  if (next < 2 || next + 1 >= x.length) return null
  const nodes = [next - 2, next - 1, next, next + 1]
  return nodes.reduce((sum, i) => sum + y[i]! * nodes.reduce((product, j) => j === i ? product : product * (at - x[j]!) / (x[i]! - x[j]!), 1), 0)
}

/** Standard error of a measure of both readings: each source of error moves them together as it does in truth. */
function errorsAt({ offset_ppm: x, z, zSe, s0RelativeSe, shiftSe_ppm }: CentredSpectrum, offset: number): (measure: Measure) => number | null {
  if (zSe === null) return () => null
  const read = (values: ArrayLike<number>, by = 0) => {
    const pchip = createPchip(x, values)
    return [pchip.at(offset + by), pchip.at(by - offset)] as const
  }
  const sources: (readonly [readonly [number, number], readonly [number, number]])[] = []
  const values = z.slice()
  for (const i of nodesNear(x, [offset, -offset])) {
    values[i] = z[i]! + zSe[i]!
    const up = read(values)
    values[i] = z[i]! - zSe[i]!
    sources.push([up, read(values)])
    values[i] = z[i]!
  }
  if (s0RelativeSe !== null) sources.push([read(z.map(one => one * (1 + s0RelativeSe))), read(z.map(one => one * (1 - s0RelativeSe)))])
  const here = read(z)
  const cubic = [cubicAt(x, z, offset) ?? here[0], cubicAt(x, z, -offset) ?? here[1]] as const
  const moved = shiftSe_ppm === null ? [] : [read(z, shiftSe_ppm), read(z, -shiftSe_ppm)].filter(pair => !pair.some(Number.isNaN))
  return (measure) => {
    const linear = sources.reduce((sum, [up, down]) => sum + ((measure(...up) - measure(...down)) / 2) ** 2, 0)
    // at the top of a dip both directions change Z alike: differences from where it stands, not between the two
    const shifted = moved.reduce((sum, pair) => sum + (measure(...pair) - measure(...here)) ** 2, 0) / Math.max(1, moved.length)
    return Math.sqrt(linear + shifted + (measure(...cubic) - measure(...here)) ** 2)
  }
}

/** The points that a monotone cubic takes into account at each place: the two around it and one more on either side. */
function nodesNear(x: readonly number[], places: readonly number[]): number[] {
  const near = new Set<number>()
  for (const at of places) {
    const next = x.findIndex(one => one >= at)
    for (let i = Math.max(0, next - 3); i <= Math.min(x.length - 1, next + 2); i++) near.add(i)
  }
  return [...near]
}

/** AREX = MTR_Rex·R1w, s⁻¹, with the error of R1w where it has one. */
export function arex(mtrRex: WithError, r1w: { readonly rate1_per_s: number, readonly se: number | null }): WithError {
  if (!(r1w.rate1_per_s > 0)) return { value: NaN, se: null }
  const se = mtrRex.se === null ? null : Math.hypot(mtrRex.se * r1w.rate1_per_s, mtrRex.value * (r1w.se ?? 0))
  return { value: mtrRex.value * r1w.rate1_per_s, se }
}

/** MTR_asym along the offsets that have a mirror image: the magnitudes of the measured offsets on both sides, ascending. */
export function asymmetryCurve(spectrum: CentredSpectrum): { offset_ppm: number, value: number, se: number | null }[] {
  const { offset_ppm: x, z } = spectrum
  const reach = Math.min(-x[0]!, x.at(-1)!)
  if (!(reach > 0)) return []
  const pchip = createPchip(x, z)
  const places = [...new Set(x.map(Math.abs))].filter(at => at > 0 && at <= reach).sort((a, b) => a - b)
  return places.map(at => ({ offset_ppm: at, value: pchip.at(-at) - pchip.at(at), se: errorsAt(spectrum, at)((lab, ref) => ref - lab) }))
}

/**
 * Area under MTR_asym between two offsets, in ppm: ∫Z(−x) − Z(x) dx, exact for the interpolated spectrum.
 * @param window_ppm ends, of one sign, in either order
 */
export function asymmetryArea(spectrum: CentredSpectrum, window_ppm: readonly [number, number]): ({ readonly ok: true } & WithError) | ExchangeRefusal {
  const { offset_ppm: x, z, zSe, s0RelativeSe, shiftSe_ppm } = spectrum
  const [a, b] = [Math.min(...window_ppm), Math.max(...window_ppm)]
  if (!(a < b) || a * b < 0) return refuseExchange('badWindow', `The window runs from ${a} to ${b} ppm.`, 'Two different ends on one side of water.')
  const area = (values: ArrayLike<number>, by = 0) => {
    const pchip = createPchip(x, values)
    return pchip.integral(by - b, by - a) - pchip.integral(a + by, b + by)
  }
  const value = area(z)
  if (Number.isNaN(value)) return refuseExchange('outsideSpectrum', `The spectrum does not hold ${a} to ${b} ppm on both sides of water.`, 'A window that lies in the data on both sides.')
  if (zSe === null) return { ok: true, value, se: null }
  const values = z.slice()
  let variance = 0
  for (let i = 0; i < x.length; i++) {
    values[i] = z[i]! + zSe[i]!
    const up = area(values)
    values[i] = z[i]! - zSe[i]!
    variance += ((up - area(values)) / 2) ** 2
    values[i] = z[i]!
  }
  variance += (value * (s0RelativeSe ?? 0)) ** 2
  if (shiftSe_ppm !== null) {
    const ends = [shiftSe_ppm, -shiftSe_ppm].map(by => area(z, by)).filter(one => !Number.isNaN(one))
    variance += ends.length === 0 ? 0 : Math.max(...ends.map(one => Math.abs(one - value))) ** 2
  }
  return { ok: true, value, se: Math.sqrt(variance) }
}

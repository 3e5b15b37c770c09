import type { CentredSpectrum } from './asymmetry'
import type { NormalisedSpectrum } from './normalise'
import type { WaterShift } from './waterShift'

/** Something about the data or a fit that a person must know before using it: what was seen, and what to do. */
export interface ExchangeFlag { readonly id: string, readonly title: string, readonly sentence: string }

/** The pool that a spectrum was measured for. */
export interface ExpectedPool { readonly offset_ppm: number, readonly width_ppm: number }

const DRIFT_LIMIT = 0.02
const HIGHEST_Z = 1.03
const PLATEAU_RISE = 0.03
const PLATEAU_LEAST = 0.9
const SATURATED = 0.05
const signed = (ppm: number): string => `${ppm > 0 ? '+' : ''}${Number(ppm.toPrecision(4))}`
const percent = (fraction: number): string => `${(100 * fraction).toPrecision(2)} %`

/**
 * Flags of one spectrum after processing, each with what to do. The limits are those of the method: a third of the width for the spacing, 2 % for the drift of S0, 1.03 for Z, a
 * twentieth of the width for the error of the water position (common practice, no source).
 */
export function spectrumFlags(normalised: NormalisedSpectrum, shift: WaterShift, pool: ExpectedPool): ExchangeFlag[] {
  const centred = { offset_ppm: normalised.offset_ppm.map(at => at - shift.shift_ppm), z: normalised.z, zSe: normalised.zSe }
  return [...s0Flags(normalised), ...rangeFlags(centred, pool), ...shiftFlags(centred, shift, pool)]
}

function s0Flags({ drift, readings, offset_ppm, z, noise }: NormalisedSpectrum): ExchangeFlag[] {
  const flags: ExchangeFlag[] = []
  if (drift && Math.abs(drift.fraction) > DRIFT_LIMIT) flags.push({ id: 's0Drift', title: 'S0 drifts', sentence: `S0 changed by ${percent(drift.fraction)} between its first and last reading; the spectrum was corrected along a straight line. Bracket shorter stretches with S0, or wait for the receiver and the temperature to settle.` })
  if (noise === null) flags.push({ id: 'noNoise', title: 'No noise known', sentence: 'S0 was not repeated and no standard deviation is given: asymmetry and transfer have no error of their own. Repeat S0 at least twice before and after the scan.' })
  const repeated = offset_ppm.filter((_, i) => readings[i]! > 1)
  if (repeated.length > 0) flags.push({ id: 'repeatedOffsets', title: 'Offsets measured twice', sentence: `${repeated.length} offset${repeated.length > 1 ? 's were' : ' was'} measured more than once (${repeated.slice(0, 3).map(signed).join(', ')}${repeated.length > 3 ? ', …' : ''} ppm) and averaged. Leave one reading out if it is not a repeat but a slip.` })
  const above = z.map((value, i) => ({ value, at: offset_ppm[i]! })).filter(one => one.value > HIGHEST_Z)
  const highest = above.reduce((a, b) => b.value > a.value ? b : a, { value: 0, at: 0 })
  if (above.length > 0) flags.push({ id: 'zAboveOne', title: 'Z above 1.03', sentence: `Z is ${highest.value.toFixed(3)} at ${signed(highest.at)} ppm${above.length > 1 ? ` and above 1.03 at ${above.length - 1} more` : ''}: no saturation gives that. Check S0 and the receiver gain.` })
  if (Math.max(...z) < SATURATED) flags.push({ id: 'saturatedEverywhere', title: 'Saturated everywhere', sentence: `Z stays below ${SATURATED} at every offset: the water is saturated throughout, or S0 belongs to another gain. Use weaker B1 and check S0.` })
  return flags
}

function rangeFlags({ offset_ppm: x, z, zSe }: Pick<CentredSpectrum, 'offset_ppm' | 'z' | 'zSe'>, pool: ExpectedPool): ExchangeFlag[] {
  const flags: ExchangeFlag[] = []
  const [low, high] = [x[0]!, x.at(-1)!]
  const span = `${signed(low)} to ${signed(high)} ppm`
  const brackets = (at: number) => x.some(one => one < at) && x.some(one => one > at)
  if (low >= -0.2 || high <= 0.2) flags.push({ id: 'oneSided', title: 'One side of water only', sentence: `The offsets run from ${span} from water: without the other side there is no asymmetry and no reference for direct saturation. Measure the mirrored offsets as well.` })
  else if (!brackets(-pool.offset_ppm)) flags.push({ id: 'mirrorOutside', title: 'Opposite side not measured', sentence: `The offsets (${span}) do not reach around ${signed(-pool.offset_ppm)} ppm, opposite the pool: no asymmetry can be had there. Extend the scan on that side.` })
  if (!brackets(pool.offset_ppm)) flags.push({ id: 'poolOutside', title: 'Pool not bracketed', sentence: `The offsets (${span}) do not bracket the pool at ${signed(pool.offset_ppm)} ppm. Extend the scan beyond it, or correct the pool's offset.` })
  else {
    const next = x.findIndex(one => one > pool.offset_ppm)
    const spacing = x[next]! - x[next - 1]!
    if (spacing > pool.width_ppm / 3) flags.push({ id: 'coarseSpacing', title: 'Offsets too far apart', sentence: `Offsets stand ${spacing.toPrecision(2)} ppm apart at the pool, whose width is ${pool.width_ppm} ppm: a third of the width is the limit. Add offsets around ${signed(pool.offset_ppm)} ppm.` })
  }
  const ends = endsOf(x, z, zSe)
  const moving = ends.find(end => end.rise > PLATEAU_RISE)
  if (moving) flags.push({ id: 'noPlateau', title: 'No plateau at far offsets', sentence: `Z still changes by ${percent(moving.rise)} over the outer fifth of the ${moving.side} side: the far offsets are not free of saturation. Go farther out, or normalise by S0 without saturation.` })
  else if (Math.max(...ends.map(end => end.z)) < PLATEAU_LEAST) flags.push({ id: 'noPlateau', title: 'No plateau at far offsets', sentence: `Z ends at ${Math.max(...ends.map(end => end.z)).toFixed(2)} on its higher side, far from 1: a broad background, strong saturation, or an S0 that does not belong to it. Go farther out or check S0.` })
  return flags
}

/** How far Z still moves over the outer fifth of each side, beyond its noise, and where it ends. */
function endsOf(x: readonly number[], z: readonly number[], zSe: readonly number[] | null): { side: 'negative' | 'positive', rise: number, z: number }[] {
  const last = x.length - 1
  const inner = (limit: (at: number) => boolean, from: number, step: 1 | -1): number => {
    let i = from
    while (i + step >= 0 && i + step <= last && !limit(x[i]!)) i += step
    return i
  }
  const ends = [{ side: 'negative' as const, end: 0, start: inner(at => at >= 0.8 * x[0]!, 0, 1), isThere: x[0]! < 0 }, { side: 'positive' as const, end: last, start: inner(at => at <= 0.8 * x[last]!, last, -1), isThere: x[last]! > 0 }]
  return ends.filter(one => one.isThere).map(({ side, end, start }) => {
    const noise = zSe === null ? 0 : 2 * Math.hypot(zSe[end]!, zSe[start]!)
    return { side, z: z[end]!, rise: Math.max(0, Math.abs(z[end]! - z[start]!) - noise) }
  })
}

function shiftFlags({ offset_ppm: x }: Pick<CentredSpectrum, 'offset_ppm'>, shift: WaterShift, pool: ExpectedPool): ExchangeFlag[] {
  const flags: ExchangeFlag[] = []
  if (shift.method === 'none') flags.push({ id: 'noShift', title: 'Water position not corrected', sentence: 'Offsets were taken as counted from water, with no error. Measure the water shift with a scan of its own, or use the dip of the spectrum.' })
  if (shift.se_ppm !== null && shift.se_ppm > pool.width_ppm / 20) flags.push({ id: 'shiftError', title: 'Water position uncertain', sentence: `The water shift is known to ± ${shift.se_ppm.toPrecision(2)} ppm, more than a twentieth of the pool's width (${pool.width_ppm} ppm). Use finer offsets across the water or a scan of weak saturation.` })
  if (shift.asymmetry !== null && shift.asymmetry > 3) flags.push({ id: 'waterAsymmetric', title: 'Water dip not symmetric', sentence: `The dip differs from its mirror image by ${shift.asymmetry.toPrecision(2)} times the noise: something stands beside the water. Use weaker saturation for the water scan.` })
  const reach = Math.abs(pool.offset_ppm) + pool.width_ppm / 2
  const before = x.map(at => at + shift.shift_ppm)
  const holds = (axis: readonly number[]) => axis[0]! <= -reach && axis.at(-1)! >= reach
  if (holds(before) && !holds(x)) flags.push({ id: 'shiftLeavesData', title: 'Window leaves the data', sentence: `After the water shift of ${signed(shift.shift_ppm)} ppm the pool's window no longer lies in the data on both sides. Extend the scan by the shift.` })
  return flags
}

/** Reach in ppm above which offsets are asked about: no proton of a complex is known that far out (common practice, no source). */
const FARTHEST_ppm = 400

/**
 * The unit that offsets are in, judged by their size, where it is not the one stated; null where the stated one may be right. The person is asked, nothing is converted.
 * @param protonFrequency_MHz Larmor frequency of the proton
 */
export function suspectOffsetUnit(offsets: readonly number[], stated: 'ppm' | 'Hz', protonFrequency_MHz: number): { readonly likely: 'ppm' | 'Hz', readonly sentence: string } | null {
  const reach = Math.max(...offsets.map(Math.abs))
  if (stated === 'ppm' && reach > FARTHEST_ppm) {
    return { likely: 'Hz', sentence: `The offsets reach ${reach.toPrecision(4)} ppm, farther than any proton of a complex; in Hz that would be ${(reach / protonFrequency_MHz).toPrecision(3)} ppm. Say which unit they are in.` }
  }
  const inPpm = reach / protonFrequency_MHz
  if (stated === 'Hz' && inPpm < 0.7) {
    return { likely: 'ppm', sentence: `The offsets reach ${reach.toPrecision(4)} Hz, ${inPpm.toPrecision(2)} ppm, which holds nothing but water. Say whether they are in ppm.` }
  }
  return null
}

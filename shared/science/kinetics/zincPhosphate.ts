/**
 * Transmetallation by zinc in phosphate buffer: R1p(t)/R1p(0), the ratio at 72 h and the time to 0.80. Read between measured points, never beyond them.
 * @source S. Laurent, L. Vander Elst, F. Copoix, R. N. Muller, Invest. Radiol. 36, 115 (2001)
 */
import { refuseKinetics, type KineticsRefusal } from './weightedLinear'

export interface ZincPoint { readonly time_h: number, readonly rate1_per_s: number, readonly se_per_s: number | null }
export interface ZincAnswer {
  readonly ok: true
  readonly ratios: readonly { readonly time_h: number, readonly ratio: number, readonly se: number | null }[]
  /** Null where the course ends before 72 h. */
  readonly ratio72: { readonly value: number, readonly se: number | null } | null
  /** 'notReached': the ratio stays above 0.80, and the time is longer than the last measured one. */
  readonly timeTo080: { readonly status: 'reached', readonly time_h: number } | { readonly status: 'notReached', readonly longerThan_h: number }
}

export const ZINC_END_h = 72
export const ZINC_RATIO = 0.8
/** A paramagnetic rate below this share of the diamagnetic one carries the index no more. */
const SMALL_SHARE = 0.5

/** Evaluates a course whose first point is the mixing, with the rate of the buffer without complex. */
export function zincPhosphate(points: readonly ZincPoint[], rate1Dia_per_s: number): ZincAnswer | KineticsRefusal {
  const bad = points.findIndex(p => !(p.time_h >= 0 && Number.isFinite(p.time_h) && p.rate1_per_s > 0 && Number.isFinite(p.rate1_per_s)))
  if (bad >= 0) return refuseKinetics('badPoint', `Point ${bad + 1} has no usable time or rate.`, 'Times of 0 h or more and rates above zero.')
  if (!(rate1Dia_per_s >= 0)) return refuseKinetics('noBlank', 'The rate of the buffer without complex is not known.', 'R1 of the blank, 0 s^-1 or more, at the same field and temperature.')
  const sorted = [...points].sort((a, b) => a.time_h - b.time_h)
  const zero = sorted[0]
  if (!zero || zero.time_h !== 0 || sorted.length < 3) return refuseKinetics('noStart', 'The course has no point at 0 h, or fewer than three points.', 'A point at mixing (0 h) and two later ones.')
  if (sorted.some((p, i) => i > 0 && p.time_h === sorted[i - 1]!.time_h)) return refuseKinetics('repeatedTime', 'Two points have the same time.', 'Repeats averaged to one point for each time.')
  const para0 = zero.rate1_per_s - rate1Dia_per_s
  if (!(para0 > SMALL_SHARE * rate1Dia_per_s)) return refuseKinetics('smallRate', `R1p at 0 h is only ${para0.toPrecision(3)} s^-1.`, 'A complex whose R1p is well above the blank (gadolinium, or the gadolinium analogue, marked as such).')
  const ratios = sorted.map(p => {
    const ratio = (p.rate1_per_s - rate1Dia_per_s) / para0
    const se = p.se_per_s === null || zero.se_per_s === null ? null : p === zero ? 0 : Math.hypot(p.se_per_s, ratio * zero.se_per_s) / para0
    return { time_h: p.time_h, ratio, se }
  })
  return { ok: true, ratios, ratio72: at72(ratios), timeTo080: crossing(ratios) }
}

function at72(ratios: ZincAnswer['ratios']): ZincAnswer['ratio72'] {
  const after = ratios.findIndex(r => r.time_h >= ZINC_END_h)
  if (after < 1) return null
  const [a, b] = [ratios[after - 1]!, ratios[after]!]
  const u = (ZINC_END_h - a.time_h) / (b.time_h - a.time_h)
  return { value: a.ratio + u * (b.ratio - a.ratio), se: a.se === null || b.se === null ? null : Math.hypot((1 - u) * a.se, u * b.se) }
}

function crossing(ratios: ZincAnswer['ratios']): ZincAnswer['timeTo080'] {
  const after = ratios.findIndex(r => r.ratio <= ZINC_RATIO)
  if (after < 1) return { status: 'notReached', longerThan_h: ratios.at(-1)!.time_h }
  const [a, b] = [ratios[after - 1]!, ratios[after]!]
  return { status: 'reached', time_h: a.time_h + (a.ratio - ZINC_RATIO) / (a.ratio - b.ratio) * (b.time_h - a.time_h) }
}

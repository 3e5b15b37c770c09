import type { LeastSquaresProblem } from '../least-squares/problem'
import { columnCount, cwSensitivities } from './sensitivities'
import { b1Of, columnOf, systemOf, toInner, toOuter, type SeriesLayout } from './seriesLayout'
import { cwSpectrum } from './spectrum'
import type { SeriesSpectrum } from './seriesTypes'

/** A spectrum without the points left out. */
export interface UsedSpectrum {
  readonly spectrum: SeriesSpectrum
  /** Positions of the points used. */
  readonly used: readonly number[]
  readonly offsets_ppm: Float64Array
  readonly z: Float64Array
  /** 1/σ; null when σ is not known. */
  readonly weights: Float64Array | null
}

/** Something outside the fit that moves the points: a column of the sensitivities, times a factor of the spectrum. */
export interface Cause { readonly column: number, readonly by: (one: UsedSpectrum) => number }

export interface SeriesProblem extends LeastSquaresProblem {
  readonly layout: SeriesLayout
  readonly spectra: readonly UsedSpectrum[]
  /** Half the weighted difference of every point between B1 a standard error above and below, in the tubes named: nutation would make the derivative far too steep. */
  byB1: (inner: Float64Array, tubes: readonly number[]) => Float64Array
  /** Weighted change of every point for each cause. */
  byCauses: (inner: Float64Array, causes: readonly Cause[]) => Float64Array[]
}

/** The weighted problem over the fitted numbers: one set of pools a tube, one sweep of sensitivities a spectrum. */
export function seriesProblem(layout: SeriesLayout, spectra: readonly UsedSpectrum[]): SeriesProblem {
  const { coordinates, slots, positions } = layout
  const m = coordinates.length
  const n = spectra.reduce((sum, one) => sum + one.used.length, 0)
  const columns = columnCount(layout.model.pools.length)
  const longest = Math.max(...spectra.map(one => one.used.length))
  const z = new Float64Array(longest)
  const derivatives = new Float64Array(columns * longest)
  const outer = new Float64Array(m)
  const slotColumns = slots.map(columnOf)

  const sweep = (inner: ArrayLike<number>, take: (one: UsedSpectrum, from: number, z: Float64Array, derivatives: Float64Array) => void): void => {
    for (let j = 0; j < m; j++) outer[j] = toOuter(coordinates[j]!, inner[j]!)
    let from = 0
    for (const one of spectra) {
      const { tube, duration_s, initial_frac } = one.spectrum
      const count = one.used.length
      const some = z.subarray(0, count)
      cwSensitivities(systemOf(layout, tube, outer), { b1_uT: b1Of(one.spectrum, layout.tubes), duration_s, initial_frac }, one.offsets_ppm, some, derivatives)
      take(one, from, some, derivatives)
      from += count
    }
  }
  const factorOf = (slotAt: number, tube: number): number => slots[slotAt]!.name === 'ratio_per_mM' ? layout.tubes[tube]!.conc_mM : 1
  return {
    n, m, layout, spectra,
    lower: Float64Array.from(coordinates, one => toInner(one, one.min)),
    upper: Float64Array.from(coordinates, one => toInner(one, one.max)),
    evaluate(inner, residual, jacobian) {
      jacobian.fill(0)
      sweep(inner, (one, from, values, d) => {
        const { tube } = one.spectrum
        const count = one.used.length
        for (let i = 0; i < count; i++) residual[from + i] = (one.weights?.[i] ?? 1) * (values[i]! - one.z[i]!)
        for (let s = 0; s < slots.length; s++) {
          const j = positions[s]![tube]!
          if (j < 0) continue
          const by = factorOf(s, tube) * (coordinates[j]!.isLog ? outer[j]! : 1)
          const column = slotColumns[s]! * count
          // A tube without agent says nothing of the ratio, whose derivative is not defined there.
          for (let i = 0; i < count && by !== 0; i++) jacobian[j * n + from + i]! += by * (one.weights?.[i] ?? 1) * d[column + i]!
        }
      })
    },
    byB1(inner, some) {
      const out = new Float64Array(n)
      for (let j = 0; j < m; j++) outer[j] = toOuter(coordinates[j]!, inner[j]!)
      let from = 0
      for (const { spectrum, used, offsets_ppm, weights } of spectra) {
        const { tube } = spectrum
        if (some.includes(tube)) {
          const at = (sign: number) => cwSpectrum(systemOf(layout, tube, outer), { ...spectrum, b1_uT: b1Of(spectrum, layout.tubes) * (1 + sign * layout.tubes[tube]!.b1Se_frac!) }, offsets_ppm)
          const [above, below] = [at(1), at(-1)]
          for (let i = 0; i < used.length; i++) out[from + i] = 0.5 * (weights?.[i] ?? 1) * (above[i]! - below[i]!)
        }
        from += used.length
      }
      return out
    },
    byCauses(inner, causes) {
      if (causes.length === 0) return []
      const out = causes.map(() => new Float64Array(n))
      sweep(inner, (one, from, _, d) => {
        const count = one.used.length
        causes.forEach((cause, c) => {
          const by = cause.by(one)
          for (let i = 0; i < count && by !== 0; i++) out[c]![from + i] = by * (one.weights?.[i] ?? 1) * d[cause.column * count + i]!
        })
      })
      return out
    },
  }
}

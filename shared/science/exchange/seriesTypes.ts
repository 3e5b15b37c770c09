import type { NoIntervalReason, SigmaUsed } from '../least-squares/outcome'
import type { SeriesFlag } from './seriesFlags'
import type { StopReason } from '../least-squares/problem'

/** Spectra of one solution and setting: tubes of a series differ in concentration, pH or temperature. */
export interface SeriesTube {
  readonly conc_mM: number
  /** True B1 over the B1 stated; default 1. */
  readonly b1Scale?: number
  /** Relative standard error of that scale; null or absent when not known. */
  readonly b1Se_frac?: number | null
}

/** One spectrum after normalisation. Offsets as measured: the place of water is a parameter. */
export interface SeriesSpectrum {
  /** Position in the tubes. */
  readonly tube: number
  readonly b1_uT: number
  readonly duration_s: number
  /** Magnetisation before saturation over equilibrium; default 1. */
  readonly initial_frac?: number
  readonly offsets_ppm: readonly number[]
  readonly z: readonly number[]
  /** Known standard deviation of each point, or one for all; null or absent when not known. */
  readonly sigma?: number | readonly number[] | null
  /** Indices of points left out. */
  readonly exclude?: readonly number[]
}

/** A quantity that is held, with its error, or fitted. One value for all, or one a tube. */
export type Quantity =
  | { readonly kind: 'held', readonly value: number | readonly number[], readonly se?: number | null }
  | { readonly kind: 'fitted', readonly start?: number, readonly min?: number, readonly max?: number, readonly perTube?: boolean }

export interface SeriesPool {
  readonly label: string
  readonly shift_ppm: Quantity
  readonly exchange_per_s: Quantity
  readonly rate1_per_s: Quantity
  readonly rate2_per_s: Quantity
  /** Protons of the pool over protons of water for 1 mM of agent: n/111 000 for n protons of that shift. */
  readonly ratio_per_mM: Quantity
}

export interface SeriesModel {
  readonly field_T: number
  readonly water: { readonly rate1_per_s: Quantity, readonly rate2_per_s: Quantity, readonly shift_ppm: Quantity }
  /** 1 to 3. */
  readonly pools: readonly SeriesPool[]
}

export interface SeriesFitOptions {
  /** Coverage of the interval; default 0.95. */
  readonly level?: number
  /** Offsets nearer to water than this are left out; absent: those where the nutation of water has not died away after short saturation. */
  readonly leaveOutNearWater_ppm?: number
  /** B1 errors of all tubes have one cause (default), or one each. */
  readonly b1ErrorIsCommon?: boolean
  readonly maxEvaluations?: number
}

export interface SeriesParameter {
  /** Name of the quantity, such as `exchange_per_s`. */
  readonly name: string
  /** Label of the pool, or 'water'. */
  readonly of: string
  readonly unit: string
  /** Null where all tubes share the value. */
  readonly tube: number | null
  readonly value: number
  /** Scatter and carried errors together; null where it cannot be estimated. */
  readonly se: number | null
  readonly scatterSe: number | null
  readonly carriedSe: number | null
  /** Positive quantities: on the scale of their logarithm. */
  readonly interval: readonly [number, number] | null
  readonly atBound: boolean
}

/** An error that the spectra do not show, and what it does to each parameter. */
export interface CarriedError {
  readonly source: string
  /** Change of each parameter for one standard error, in the order of the parameters. */
  readonly change: readonly number[]
}

export interface SeriesFitDone {
  readonly ok: true
  readonly parameters: readonly SeriesParameter[]
  /** Null where no errors exist. Of the parameters as fitted: logarithms of positive quantities. Scatter only. */
  readonly correlation: readonly (readonly number[])[] | null
  readonly carried: readonly CarriedError[]
  readonly points: number
  readonly dof: number
  /** Degrees of freedom behind the scatter; null = unlimited. */
  readonly intervalDof: number | null
  readonly level: number
  readonly sigmaUsed: SigmaUsed
  /** Standard deviation of a point from the scatter; null with known σ. */
  readonly sigma: number | null
  /** With known σ. */
  readonly reducedChi2: number | null
  readonly rss: number
  readonly condition: number | null
  readonly noInterval: { readonly reason: NoIntervalReason, readonly message: string } | null
  /** Of the last search, over all points. */
  readonly evaluations: number
  readonly stop: StopReason
  readonly converged: boolean
  /** Searches from different starts over some of the points, and how many of them reached the lowest sum of squares. */
  readonly starts: { readonly tried: number, readonly agree: number }
  readonly flags: readonly SeriesFlag[]
  /** Per spectrum, at every offset given. */
  readonly fitted: readonly (readonly number[])[]
  /** z − fitted; null at points left out. */
  readonly residuals: readonly (readonly (number | null)[])[]
  /** Points left out for the nutation of water, or because they are as near to it as asked. */
  readonly leftOutNearWater: number
  readonly assumptions: string
}

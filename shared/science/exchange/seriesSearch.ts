import type { Solution } from '../least-squares/problem'
import { solve } from '../least-squares/trustRegion'
import { b1Of, systemOf, toInner, type SeriesLayout } from './seriesLayout'
import { seriesProblem, type SeriesProblem, type UsedSpectrum } from './seriesProblem'
import type { SeriesFitOptions } from './seriesTypes'
import { cwSpectrum } from './spectrum'

/** Starts searched from, of those that come nearest to the data. */
const SEARCHED = 3
/** Points a parameter that the search before the last one has; and the coarsest choice of points. */
const COARSE_POINTS = 8
const COARSEST = 4
/** It ends where it no longer moves by this; two sums of squares that differ by less than the second are one minimum. */
const COARSE_TOLERANCE = 1e-3
const SAME_MINIMUM = 1e-2
/** The last search starts next to the minimum: a step that lowers the sum by less than this is followed by one of Gauss and Newton, which leaves less than 1e-3 standard errors. */
const LAST_TOLERANCE = 1e-3
const LAST_POLISH = 1
const MOST_EVALUATIONS = 60

export interface Found { readonly best: Solution, readonly tried: number, readonly agree: number, readonly evaluations: number }

/** Starts are ordered by the equations themselves; some of the points decide between them, and all bring the best one to the end. */
export function searchSeries(problem: SeriesProblem, starts: readonly Float64Array[], { maxEvaluations }: SeriesFitOptions): Found | null {
  const { layout } = problem
  const some = thinned(layout, problem.spectra)
  const coarse = seriesProblem(layout, some)
  const solutions = starts
    .map(start => ({ inner: Float64Array.from(layout.coordinates, (one, j) => toInner(one, start[j]!)), cost: costOf(layout, some, start) }))
    .filter(one => one.cost < Infinity).sort((a, b) => a.cost - b.cost).slice(0, SEARCHED)
    .map(one => solve(coarse, one.inner, { reductionTolerance: COARSE_TOLERANCE, stepTolerance: COARSE_TOLERANCE, polishSteps: 0, maxEvaluations: maxEvaluations ?? MOST_EVALUATIONS }))
    .filter(one => one.stop !== 'notFinite').sort((a, b) => a.sumOfSquares - b.sumOfSquares)
  const nearest = solutions[0]
  if (!nearest) return null
  const quick = solve(problem, nearest.parameters, { reductionTolerance: LAST_TOLERANCE, stepTolerance: LAST_TOLERANCE, polishSteps: LAST_POLISH, maxEvaluations: maxEvaluations ?? MOST_EVALUATIONS })
  // Not yet stationary, as where two pools overlap: on to the engine's own tolerances.
  const best = quick.converged || quick.stop === 'notFinite' ? quick : solve(problem, quick.parameters, { maxEvaluations: maxEvaluations ?? MOST_EVALUATIONS })
  if (best.stop === 'notFinite') return null
  return {
    best, tried: solutions.length, evaluations: best === quick ? quick.evaluations : quick.evaluations + best.evaluations,
    agree: solutions.filter(one => one.sumOfSquares <= nearest.sumOfSquares * (1 + SAME_MINIMUM) + Number.MIN_VALUE).length,
  }
}

/** As many points as decide between starts. */
export function thinned(layout: SeriesLayout, spectra: readonly UsedSpectrum[]): UsedSpectrum[] {
  const n = spectra.reduce((sum, one) => sum + one.used.length, 0)
  const stride = Math.min(Math.max(Math.floor(n / (COARSE_POINTS * layout.coordinates.length)), 1), COARSEST)
  return spectra.map((one, s) => everyNth(one, stride, s))
}

/** Every n-th point, not the same ones in every spectrum. */
function everyNth({ spectrum, used, offsets_ppm, z, weights }: UsedSpectrum, stride: number, first: number): UsedSpectrum {
  const isKept = (_: unknown, i: number) => i % stride === first % stride
  return { spectrum, used: used.filter(isKept), offsets_ppm: offsets_ppm.filter(isKept), z: z.filter(isKept), weights: weights && weights.filter(isKept) }
}

function costOf(layout: SeriesLayout, spectra: readonly UsedSpectrum[], outer: Float64Array): number {
  let sum = 0
  for (const { spectrum, offsets_ppm, z, weights } of spectra) {
    const values = cwSpectrum(systemOf(layout, spectrum.tube, outer), { ...spectrum, b1_uT: b1Of(spectrum, layout.tubes) }, offsets_ppm)
    for (let i = 0; i < z.length; i++) sum += ((weights?.[i] ?? 1) * (values[i]! - z[i]!)) ** 2
  }
  return sum
}

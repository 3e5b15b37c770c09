import { exactExp } from '../exactMath'
import { correlationOf, informationOf, type Information } from '../least-squares/covariance'
import { studentFactor } from '../least-squares/line'
import type { NoIntervalReason } from '../least-squares/outcome'
import type { Solution } from '../least-squares/problem'
import { LARGEST_CONDITION } from '../least-squares/reportFit'
import { ppmToRadPerS } from './poolSystem'
import { refuseExchange, type ExchangeRefusal } from './refusal'
import { findSeriesProblem } from './seriesChecks'
import { seriesFlags } from './seriesFlags'
import { b1Of, columnOf, layoutOf, systemOf, toOuter, type SeriesLayout } from './seriesLayout'
import { seriesProblem, type Cause, type SeriesProblem, type UsedSpectrum } from './seriesProblem'
import { searchSeries, thinned, type Found } from './seriesSearch'
import { findStarts } from './seriesStart'
import type { CarriedError, SeriesFitDone, SeriesFitOptions, SeriesModel, SeriesParameter, SeriesSpectrum, SeriesTube } from './seriesTypes'
import { cwSpectrum } from './spectrum'
import { omega1_rad_per_s } from './transferForms'

/** Amplitude of the nutation of water above which a point is left out. Common practice, no source: about the scatter of a good spectrum. */
const NUTATION = 0.003

export const SERIES_ASSUMPTIONS = 'Bloch–McConnell equations of water and pools that exchange with it alone, constant irradiation, any saturation time; one set of pools for all tubes but where a quantity is fitted per tube; B1 the same over the region.'

/**
 * Fits the Bloch–McConnell equations to spectra of several B1, saturation times and tubes at once.
 *
 * Errors: (JᵀWJ)⁻¹, times max(1, χ²red) with σ known and times s² without; errors of B1 and of held quantities are carried by −(JᵀWJ)⁻¹JᵀW·∂Z/∂q and added
 * in quadrature. Positive quantities are fitted, and their intervals made, on the scale of their logarithm. Starts come from a grid over shifts and exchange rates.
 * @returns a refusal where the data cannot be fitted at all
 */
export function fitSeries(model: SeriesModel, tubes: readonly SeriesTube[], spectra: readonly SeriesSpectrum[], options: SeriesFitOptions = {}): SeriesFitDone | ExchangeRefusal {
  const layout = layoutOf(model, tubes)
  const problem = findSeriesProblem(layout, spectra)
  if (problem) return problem
  if (layout.coordinates.length === 0) return refuseExchange('nothingFitted', 'Every quantity is held, so there is nothing to fit.', 'At least one quantity that is fitted.')
  const starts = findStarts(layout, thinned(layout, spectra.map(one => usedOf(one, () => false))))
  const used = spectra.map(one => usedOf(one, leftOut(layout, one, starts[0]!, options.leaveOutNearWater_ppm)))
  const weighted = seriesProblem(layout, used)
  if (weighted.n <= weighted.m) return refuseExchange('tooFewPoints', `${weighted.n} points stand against ${weighted.m} parameters.`, 'More points than parameters.')
  const found = searchSeries(weighted, starts, options)
  if (found === null) return refuseExchange('noStart', 'No start was found at which the spectra can be computed.', 'Starts of the shifts and exchange rates, or other points.')
  return report(weighted, spectra, found, options)
}

/**
 * Which offsets are left out: those nearer to water than asked, or else those where the nutation of water has not died away, sin²θ·e^{−R2·t·(1 + cos²θ)/2} above 0.003.
 * There Z follows the phase of the nutation, which B1 over a region blurs, and the sum of squares has false minima.
 */
function leftOut(layout: SeriesLayout, spectrum: SeriesSpectrum, start: Float64Array, near_ppm: number | undefined): (offset_ppm: number) => boolean {
  if (near_ppm !== undefined) return offset => Math.abs(offset) < near_ppm
  const { water, waterShift_ppm = 0 } = systemOf(layout, spectrum.tube, start)
  const perPpm = ppmToRadPerS(layout.model.field_T)
  const square = omega1_rad_per_s(b1Of(spectrum, layout.tubes)) ** 2
  return (offset) => {
    const sinSquare = square / (square + ((offset - waterShift_ppm) * perPpm) ** 2)
    return sinSquare * exactExp(-0.5 * water.rate2_per_s * spectrum.duration_s * (2 - sinSquare)) > NUTATION
  }
}

function usedOf(spectrum: SeriesSpectrum, isLeftOut: (offset_ppm: number) => boolean): UsedSpectrum {
  const left = new Set(spectrum.exclude ?? [])
  const used = spectrum.offsets_ppm.flatMap((offset, i) => left.has(i) || isLeftOut(offset) ? [] : [i])
  const { sigma } = spectrum
  return {
    spectrum, used, offsets_ppm: Float64Array.from(used, i => spectrum.offsets_ppm[i]!), z: Float64Array.from(used, i => spectrum.z[i]!),
    weights: sigma == null ? null : Float64Array.from(used, i => 1 / (typeof sigma === 'number' ? sigma : sigma[i]!)),
  }
}

function report(problem: SeriesProblem, spectra: readonly SeriesSpectrum[], { best, tried, agree, evaluations }: Found, options: SeriesFitOptions): SeriesFitDone {
  const { layout } = problem
  const level = options.level ?? 0.95
  const information = informationOf(best.jacobian, problem.n, best.atBound)
  const isKnown = problem.spectra.every(one => one.weights !== null)
  const dof = problem.n - problem.m
  const factor = isKnown ? Math.max(1, best.sumOfSquares / dof) : best.sumOfSquares / dof
  const noInterval = noIntervalOf(problem, best, information)
  const hasErrors = information.inverse !== null && (noInterval === null || noInterval.reason === 'onBound')
  const intervalDof = isKnown && best.sumOfSquares <= dof ? null : dof
  const inner = hasErrors ? carriedInner(problem, best, information.inverse!, options.b1ErrorIsCommon ?? true) : []
  const outer = Float64Array.from(layout.coordinates, (one, j) => toOuter(one, best.parameters[j]!))
  const fitted = spectra.map(one => Array.from(cwSpectrum(systemOf(layout, one.tube, outer), { ...one, b1_uT: b1Of(one, layout.tubes) }, one.offsets_ppm)))
  const residuals = spectra.map((one, s) => {
    const kept = new Set(problem.spectra[s]!.used)
    return one.z.map((z, i) => kept.has(i) ? z - fitted[s]![i]! : null)
  })
  return {
    ok: true, parameters: parametersOf(problem, best, { inverse: hasErrors ? information.inverse : null, factor, inner, outer, level, intervalDof, isStated: noInterval === null }),
    correlation: hasErrors ? correlationOf(rowsOf(information.inverse!, problem.m)) : null,
    carried: inner.map(({ source, change }) => ({ source, change: layout.coordinates.map((one, j) => one.isLog ? outer[j]! * change[j]! : change[j]!) })),
    points: problem.n, dof, intervalDof, level, sigmaUsed: isKnown ? 'known' : 'estimated', sigma: isKnown ? null : Math.sqrt(factor), reducedChi2: isKnown ? best.sumOfSquares / dof : null,
    rss: residuals.flat().reduce<number>((sum, e) => sum + (e ?? 0) ** 2, 0), condition: information.condition, noInterval, evaluations, stop: best.stop, converged: best.converged,
    starts: { tried, agree }, flags: seriesFlags(layout, problem.spectra, outer, { tried, agree }), fitted, residuals,
    leftOutNearWater: spectra.reduce((sum, one, s) => sum + one.z.length - new Set(one.exclude ?? []).size - problem.spectra[s]!.used.length, 0),
    assumptions: SERIES_ASSUMPTIONS,
  }
}

function noIntervalOf({ layout }: SeriesProblem, best: Solution, { condition }: Information): SeriesFitDone['noInterval'] {
  const because = (reason: NoIntervalReason, message: string) => ({ reason, message })
  if (!best.converged) return because('notConverged', `The search ended without a minimum (${best.stop}), so the values carry no error.`)
  if (condition === null || condition > LARGEST_CONDITION) return because('rankDeficient', 'The spectra do not tell the parameters apart, so the values carry no error.')
  const held = layout.coordinates.filter((_, j) => best.atBound[j]).map(one => `${one.name} of ${one.of}`)
  if (held.length > 0) return because('onBound', `${held.join(' and ')} ${held.length === 1 ? 'sits' : 'sit'} on a bound; the other errors hold only with the value there.`)
  return null
}

/** What one standard error of B1 and of each held quantity does to the fitted numbers. */
function carriedInner(problem: SeriesProblem, best: Solution, inverse: Float64Array, isCommon: boolean): CarriedError[] {
  const { tubes, heldErrors } = problem.layout
  const withB1Error = tubes.flatMap(({ b1Se_frac: se }, tube) => se != null && se > 0 ? [tube] : [])
  const groups = isCommon ? (withB1Error.length > 0 ? [withB1Error] : []) : withB1Error.map(tube => [tube])
  if (groups.length + heldErrors.length === 0) return []
  const ofHeld = heldErrors.map(({ slot, se }): Cause => ({ column: columnOf(slot), by: ({ spectrum }) => se * (slot.name === 'ratio_per_mM' ? tubes[spectrum.tube]!.conc_mM : 1) }))
  const sources = [...groups.map(group => isCommon ? 'B1' : `B1 of tube ${group[0]! + 1}`), ...heldErrors.map(one => one.source)]
  const columns = [...groups.map(group => problem.byB1(best.parameters, group)), ...problem.byCauses(best.parameters, ofHeld)]
  return columns.map((column, c) => ({ source: sources[c]!, change: gaussNewton(problem, best.jacobian, inverse, column).map(x => -x) }))
}

/** (JᵀJ)⁻¹·Jᵀ·column. */
function gaussNewton({ n, m }: SeriesProblem, jacobian: Float64Array, inverse: Float64Array, column: Float64Array): number[] {
  const right = Array.from({ length: m }, (_, j) => {
    let sum = 0
    for (let i = 0; i < n; i++) sum += jacobian[j * n + i]! * column[i]!
    return sum
  })
  return right.map((_, j) => right.reduce((sum, x, l) => sum + inverse[j * m + l]! * x, 0))
}

interface Errors {
  readonly inverse: Float64Array | null
  readonly factor: number
  readonly inner: readonly CarriedError[]
  readonly outer: Float64Array
  readonly level: number
  readonly intervalDof: number | null
  readonly isStated: boolean
}

function parametersOf({ layout, m }: SeriesProblem, best: Solution, { inverse, factor, inner, outer, level, intervalDof, isStated }: Errors): SeriesParameter[] {
  return layout.coordinates.map((one, j) => {
    const value = outer[j]!
    const atBound = best.atBound[j]!
    const perInner = one.isLog ? value : 1
    const shared = { name: one.name, of: one.of, unit: one.unit, tube: one.tube, value, atBound }
    if (inverse === null || atBound) return { ...shared, se: null, scatterSe: null, carriedSe: null, interval: null }
    const scatter = Math.sqrt(inverse[j * m + j]! * factor)
    const carried = Math.sqrt(inner.reduce((sum, error) => sum + error.change[j]! ** 2, 0))
    // The carried errors count as well known: the two half widths are added in quadrature.
    const half = Math.hypot(studentFactor(level, intervalDof) * scatter, studentFactor(level, null) * carried)
    return {
      ...shared, se: perInner * Math.hypot(scatter, carried), scatterSe: perInner * scatter, carriedSe: perInner * carried,
      interval: isStated ? [toOuter(one, best.parameters[j]! - half), toOuter(one, best.parameters[j]! + half)] : null,
    }
  })
}

const rowsOf = (inverse: Float64Array, m: number): number[][] => Array.from({ length: m }, (_, a) => Array.from(inverse.subarray(a * m, (a + 1) * m)))

import { fitLine, lineBand, studentFactor, type LineDone } from '../least-squares/line'
import { fitYork, type YorkDone } from '../least-squares/york'
import { compareWithBlank, type BlankAgreement } from './blankAgreement'
import { testLackOfFit, type LackOfFit } from './lackOfFit'

/** One tube of a series, as the line sees it. */
export interface RelaxivityTube {
  /** Concentration of metal. */
  readonly conc_mM: number
  /** Standard error of this tube's own concentration (pipetting); null = not given. */
  readonly concSe_mM: number | null
  /** T1 or T2. */
  readonly time_s: number
  readonly timeSe_s: number | null
  readonly isBlank: boolean
}

export interface RelaxivityOptions {
  /** Relative standard error common to all concentrations (stock assay); null = not given. */
  readonly scale_frac?: number | null
  /** Degrees of freedom behind the errors of the relaxation times (of the pooled σ); null or absent = taken as well known. */
  readonly timeSeDof?: number | null
  /** Coverage of intervals and band. Default 0.95. */
  readonly level?: number
}

/** weighted: by 1/SE² of the rates; york: rates and own concentrations with errors; unweighted: an error is missing somewhere. */
export type LineMethod = 'weighted' | 'york' | 'unweighted'

export interface LineEstimate {
  readonly value: number
  readonly se: number | null
  readonly interval: readonly [number, number] | null
}

export interface RelaxivityPoint {
  readonly conc_mM: number
  readonly rate_per_s: number
  readonly rateSe_per_s: number | null
  readonly fitted_per_s: number
  readonly residual_per_s: number
  readonly studentised: number | null
  readonly cook: number | null
  /** Slope without this tube; null where the others make no line. */
  readonly slopeWithout_per_mM_s: number | null
}

export interface RelaxivityDone {
  readonly ok: true
  /** Slope, mM⁻¹ s⁻¹; its error holds the common scale error in quadrature. */
  readonly relaxivity_per_mM_s: LineEstimate
  /** The part of the error that the line itself gives. */
  readonly fitSe_per_mM_s: number | null
  /** The part that the common concentration error gives: shared by everything made with the same stock. */
  readonly scaleSe_per_mM_s: number | null
  readonly diamagnetic_per_s: LineEstimate
  readonly method: LineMethod
  readonly dof: number
  /** Degrees of freedom of the line's intervals; null = unlimited. */
  readonly intervalDof: number | null
  readonly level: number
  readonly reducedChi2: number | null
  readonly chi2P: number | null
  readonly quadraticP: number | null
  /** Line against the scatter of tubes that share a concentration; null where none do. */
  readonly lackOfFit: LackOfFit | null
  readonly r2: number
  /** Intercept of the line through the other tubes against the blank; null without a blank or without two other concentrations. */
  readonly blank: BlankAgreement | null
  /** Largest rate over the diamagnetic one; null where that comes out at 0 or below. */
  readonly span: number | null
  readonly points: readonly RelaxivityPoint[]
  /** Covariance of slope and intercept. */
  readonly covariance: number | null
}

export interface RelaxivityRefused {
  readonly ok: false
  readonly reason: 'badTime' | 'badConcentration' | 'badScale' | 'tooFewPoints' | 'equalConcentrations' | 'notConverged'
  readonly message: string
  readonly accepted: string
}

export type RelaxivityOutcome = RelaxivityDone | RelaxivityRefused

/**
 * Relaxivity of one series: R = 1/T against the concentration of metal, R = R_dia + r·c.
 *
 * The line is weighted by 1/SE² of the rates; where tubes have concentration errors of their own it is York's. An error common to all tubes is no error of
 * a point: it scales the slope, is added to it in quadrature, and cancels in r2/r1. The blank is a point like any other.
 * @param tubes left-out tubes removed by the caller
 * @source Draper & Smith (1998) for the line; York et al., Am. J. Phys. 72, 367 (2004)
 */
export function fitRelaxivity(tubes: readonly RelaxivityTube[], { scale_frac = null, timeSeDof = null, level = 0.95 }: RelaxivityOptions = {}): RelaxivityOutcome {
  const refusal = refuseTubes(tubes, scale_frac)
  if (refusal) return refusal
  const x = tubes.map(tube => tube.conc_mM)
  const y = tubes.map(tube => 1 / tube.time_s)
  const ySigma = tubes.every(tube => tube.timeSe_s !== null) ? tubes.map(tube => tube.timeSe_s! / tube.time_s ** 2) : null
  const xSigma = tubes.map(tube => tube.concSe_mM ?? 0)
  const method: LineMethod = ySigma === null ? 'unweighted' : xSigma.some(s => s > 0) ? 'york' : 'weighted'
  const york = method === 'york' ? fitYork({ x, y, xSigma, ySigma: ySigma!, sigmaDof: timeSeDof }, { level }) : null
  if (york && !york.ok) return refuse('notConverged', york.message, 'Errors of rates and concentrations that leave a line.')
  // With the slope known, an error of the concentration is one more error of the rate: that is how York's line is judged point by point.
  const sigma = ySigma && ySigma.map((s, i) => Math.hypot(s, (york?.slope ?? 0) * xSigma[i]!))
  const judged = fitLine({ x, y, sigma, sigmaDof: timeSeDof }, { level })
  if (!judged.ok) return refuse('tooFewPoints', judged.message, judged.accepted)
  return report({ tubes, x, y, ySigma, method, judged, line: york ?? judged, lackOfFit: testLackOfFit(x, y, sigma, judged.rss), scale_frac, level })
}

const refuse = (reason: RelaxivityRefused['reason'], message: string, accepted: string): RelaxivityRefused => ({ ok: false, reason, message, accepted })

function refuseTubes(tubes: readonly RelaxivityTube[], scale_frac: number | null): RelaxivityRefused | null {
  for (const [i, { conc_mM, concSe_mM, time_s, timeSe_s }] of tubes.entries()) {
    if (!(time_s > 0 && time_s < Infinity)) return refuse('badTime', `Tube ${i + 1}: the relaxation time is ${time_s} s.`, 'A relaxation time above 0 s.')
    if (timeSe_s !== null && !(timeSe_s > 0 && timeSe_s < Infinity)) return refuse('badTime', `Tube ${i + 1}: the standard error is ${timeSe_s} s.`, 'An error above 0 s, or none.')
    if (!(conc_mM >= 0 && conc_mM < Infinity)) return refuse('badConcentration', `Tube ${i + 1}: the concentration is ${conc_mM} mM.`, 'A concentration of 0 mM or more.')
    if (concSe_mM !== null && !(concSe_mM >= 0 && concSe_mM < Infinity)) {
      return refuse('badConcentration', `Tube ${i + 1}: the error of the concentration is ${concSe_mM} mM.`, 'An error of 0 mM or more, or none.')
    }
  }
  if (scale_frac !== null && !(scale_frac >= 0 && scale_frac < 1)) return refuse('badScale', `The common concentration error is ${scale_frac}.`, 'A fraction from 0 to 1.')
  if (tubes.length < 2) return refuse('tooFewPoints', `A relaxivity needs two tubes; ${tubes.length} given.`, 'At least 2 concentrations; 3 for an interval.')
  if (tubes.every(tube => tube.conc_mM === tubes[0]!.conc_mM)) {
    return refuse('equalConcentrations', `Every tube holds ${tubes[0]!.conc_mM} mM.`, 'Tubes of two or more different concentrations.')
  }
  return null
}

interface Parts {
  readonly tubes: readonly RelaxivityTube[]
  readonly x: readonly number[]
  readonly y: readonly number[]
  readonly ySigma: readonly number[] | null
  readonly method: LineMethod
  /** Line that judges the points, with the same weights. */
  readonly judged: LineDone
  readonly line: LineDone | YorkDone
  readonly lackOfFit: LackOfFit | null
  readonly scale_frac: number | null
  readonly level: number
}

function report({ tubes, x, y, ySigma, method, judged, line, lackOfFit, scale_frac, level }: Parts): RelaxivityDone {
  const scaleSe = scale_frac === null ? null : Math.abs(line.slope) * scale_frac
  const slope = withScale(line, scaleSe, level)
  return {
    ok: true, relaxivity_per_mM_s: slope, fitSe_per_mM_s: line.slopeSe, scaleSe_per_mM_s: scaleSe,
    diamagnetic_per_s: { value: line.intercept, se: line.interceptSe, interval: line.interceptInterval }, method, dof: line.dof, intervalDof: line.intervalDof, level,
    reducedChi2: line.reducedChi2, chi2P: line.chi2P, quadraticP: judged.quadraticP, lackOfFit, r2: judged.r2,
    blank: compareWithBlank(tubes, y, ySigma), span: line.intercept > 0 ? Math.max(...y) / line.intercept : null,
    points: judged.points.map((point, i) => ({
      conc_mM: x[i]!, rate_per_s: y[i]!, rateSe_per_s: ySigma && ySigma[i]!, fitted_per_s: line.intercept + line.slope * x[i]!,
      residual_per_s: y[i]! - line.intercept - line.slope * x[i]!, studentised: point.studentised, cook: point.cook, slopeWithout_per_mM_s: point.without && point.without.slope,
    })),
    covariance: line.covariance,
  }
}

/** Error and interval of the slope with the scale error added; the scale error counts as well known, so the degrees of freedom rise (Welch–Satterthwaite). */
function withScale({ slope, slopeSe, dof, intervalDof }: LineDone | YorkDone, scaleSe: number | null, level: number): LineEstimate {
  if (slopeSe === null) return { value: slope, se: null, interval: null }
  const se = Math.hypot(slopeSe, scaleSe ?? 0)
  if (dof < 1) return { value: slope, se, interval: null }
  // An exact line leaves no error to share out.
  const effectiveDof = intervalDof === null || slopeSe === 0 ? null : intervalDof * (se / slopeSe) ** 4
  const half = studentFactor(level, effectiveDof) * se
  return { value: slope, se, interval: [slope - half, slope + half] }
}

/** Line and confidence band at a concentration. The common scale error is left out: it moves the axis, not the line on it. */
export function relaxivityBand(series: RelaxivityDone, conc_mM: number): { rate_per_s: number, low_per_s: number | null, high_per_s: number | null } {
  const { relaxivity_per_mM_s: slope, diamagnetic_per_s: intercept, fitSe_per_mM_s, covariance, dof, intervalDof, level } = series
  const { value, halfWidth } = lineBand({
    intercept: intercept.value, slope: slope.value, interceptSe: intercept.se, slopeSe: fitSe_per_mM_s, covariance, dof, intervalDof, level,
  }, conc_mM)
  return { rate_per_s: value, low_per_s: halfWidth === null ? null : value - halfWidth, high_per_s: halfWidth === null ? null : value + halfWidth }
}

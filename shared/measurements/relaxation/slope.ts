import { reportFlags } from '../../science/relaxometry/flags'
import { fitRelaxivity, relaxivityBand, type RelaxivityDone, type RelaxivityRefused } from '../../science/relaxometry/relaxivity'
import { pWords, SERIES_FLAGS } from '../../science/relaxometry/seriesFlags'
import type { NamedQuantity } from '../../evidence/quantity'
import type { Conditions, Flag, SeriesResult } from '../types'
import type { TubeRate } from './tubeRate'
import { passedText } from './tubeResult'
import { MIN_TUBES } from './tubeSet'

export interface SlopeDone { ok: true, series: SeriesResult, line: RelaxivityDone, used: TubeRate[], flags: Flag[], passed: string[] }
export interface SlopeRefused { ok: false, reason: string, message: string, accepted: string }

const LINE_POINTS = 41
/** The statistic that says whether the line is bent. */
export const QUADRATIC_LABEL = 'Quadratic term'

/** The statistic that holds the part of the error which the line itself gives. */
export const lineSeLabel = (digit: string): string => `SE of r_${digit} from the line`

/** Relaxivity of a series from the rates of its tubes; refused by value where they give no slope. */
export function fitSlope(rates: readonly TubeRate[], conditions: Conditions, digit: '1' | '2'): SlopeDone | SlopeRefused {
  const used = rates.filter(rate => rate.excluded === null)
  const accepted = `at least ${MIN_TUBES} tubes with a rate and different concentrations`
  if (used.length < MIN_TUBES) return { ok: false, reason: 'tooFewTubes', message: `${used.length} ${used.length === 1 ? 'tube is' : 'tubes are'} left with a rate: a slope with an error needs ${MIN_TUBES}.`, accepted }
  const scale = conditions.concScaleError_frac
  const line = fitRelaxivity(used.map(toLineTube), { scale_frac: typeof scale === 'number' ? scale : null })
  if (!line.ok) return refusedLine(line, used)
  const reports = reportFlags(SERIES_FLAGS, line)
  return {
    ok: true, line, used, series: seriesResult(rates, used, line, digit),
    flags: reports.filter(report => report.state === 'raised')
      .map(({ id, title, detail, advice, tube }) => ({ id, title, sentence: [namedTubes(detail ?? '', used), advice].filter(Boolean).join(' '), tubeNo: tube === null ? null : used[tube - 1]?.tubeNo ?? null })),
    passed: reports.filter(report => report.state === 'passed').map(({ title, detail }) => passedText(title, namedTubes(detail ?? '', used))),
  }
}

/** The line takes times: the error of 1/R is that of R over R². */
function toLineTube({ conc_mM, concSe_mM, rate_per_s, se_per_s, role }: TubeRate) {
  return { conc_mM, concSe_mM, time_s: 1 / rate_per_s, timeSe_s: se_per_s !== null && se_per_s > 0 ? se_per_s / rate_per_s ** 2 : null, isBlank: role === 'blank' }
}

/** The line counts the tubes it was given; people know them by the numbers of the file. */
function namedTubes(text: string, used: readonly TubeRate[]): string {
  return text.replace(/\b([Tt]ube) (\d+)/g, (whole, word: string, position: string) => {
    const tube = used[Number(position) - 1]
    return tube === undefined ? whole : `${word} ${tube.tubeNo}`
  })
}

function refusedLine({ reason, message, accepted }: RelaxivityRefused, used: readonly TubeRate[]): SlopeRefused {
  return { ok: false, reason, message: namedTubes(message, used), accepted }
}

function seriesResult(rates: readonly TubeRate[], used: readonly TubeRate[], line: RelaxivityDone, digit: '1' | '2'): SeriesResult {
  const { relaxivity_per_mM_s: slope, diamagnetic_per_s: intercept } = line
  const headline = named({ name: `r${digit}_per_mM_s`, label: `r_${digit}`, unit: 'mM^-1 s^-1' }, slope)
  const low = Math.min(...used.map(rate => rate.conc_mM))
  const high = Math.max(...used.map(rate => rate.conc_mM))
  const xs = Array.from({ length: LINE_POINTS }, (_, i) => low + (high - low) * i / (LINE_POINTS - 1))
  const band = xs.map(x => ({ x, ...relaxivityBand(line, x) }))
  return {
    headline, parameters: [headline, named({ name: `rate${digit}Dia_per_s`, label: `R_{${digit},dia}`, unit: 's^-1' }, intercept)],
    points: rates.map(rate => seriesPoint(rate, used, line)), line: band.map(({ x, rate_per_s }) => ({ x, y: rate_per_s })),
    band: band.flatMap(({ x, low_per_s, high_per_s }) => low_per_s === null || high_per_s === null ? [] : [{ x, low: low_per_s, high: high_per_s }]),
    statistics: statisticsOf(line, digit), correlation: correlationOf(line, digit),
  }
}

function named(base: Pick<NamedQuantity, 'name' | 'label' | 'unit'>, { value, se, interval }: RelaxivityDone['relaxivity_per_mM_s']): NamedQuantity {
  return { ...base, value, kind: '=', se, interval: interval && [interval[0], interval[1]], evidenceId: null }
}

/** Of slope and intercept, by the line alone: a common concentration error moves the slope only. */
function correlationOf({ covariance, fitSe_per_mM_s: slopeSe, diamagnetic_per_s: { se } }: RelaxivityDone, digit: '1' | '2'): SeriesResult['correlation'] {
  if (covariance === null || slopeSe === null || se === null || !(slopeSe > 0) || !(se > 0)) return null
  const value = covariance / (slopeSe * se)
  return { names: [`r${digit}_per_mM_s`, `rate${digit}Dia_per_s`], labels: [`r_${digit}`, `R_{${digit},dia}`], matrix: [[1, value], [value, 1]] }
}

function seriesPoint(rate: TubeRate, used: readonly TubeRate[], line: RelaxivityDone): SeriesResult['points'][number] {
  const point = line.points[used.indexOf(rate)]
  return {
    tubeNo: rate.tubeNo, label: rate.label, x: rate.conc_mM, y: rate.rate_per_s, ySe: rate.se_per_s, fitted: relaxivityBand(line, rate.conc_mM).rate_per_s,
    studentised: point?.studentised ?? null, cook: point?.cook ?? null, leaveOneOut: point?.slopeWithout_per_mM_s ?? null, excluded: rate.excluded,
  }
}

const shown = (value: number | null, digits = 3): string => value === null ? 'not available' : String(Number(value.toPrecision(digits)))

/** Label, number and words of everything the line is judged by. */
function statisticsOf(line: RelaxivityDone, digit: '1' | '2'): SeriesResult['statistics'] {
  const methods = { weighted: 'weighted by 1/SE² of the rates', york: 'errors in both coordinates', unweighted: 'not weighted: an error is missing' } as const
  const { blank } = line
  return [
    { label: 'Line', value: null, text: methods[line.method] },
    { label: 'Tubes on the line', value: line.points.length, text: `${line.points.length}, ${line.dof} degrees of freedom` },
    { label: lineSeLabel(digit), value: line.fitSe_per_mM_s, text: `${shown(line.fitSe_per_mM_s)} mM^-1 s^-1` },
    { label: `SE of r_${digit} from the common concentration error`, value: line.scaleSe_per_mM_s, text: line.scaleSe_per_mM_s === null ? 'not given' : `${shown(line.scaleSe_per_mM_s)} mM^-1 s^-1` },
    { label: 'Reduced χ²', value: line.reducedChi2, text: line.reducedChi2 === null ? 'not available: no errors of the rates' : `${shown(line.reducedChi2)}${line.chi2P === null ? '' : `, ${pWords(line.chi2P)}`}` },
    { label: QUADRATIC_LABEL, value: line.quadraticP, text: line.quadraticP === null ? 'not available' : pWords(line.quadraticP) },
    { label: 'Lack of fit', value: line.lackOfFit?.p ?? null, text: line.lackOfFit === null ? 'no two tubes share a concentration' : `F(${line.lackOfFit.dof1}, ${line.lackOfFit.dof2}) = ${shown(line.lackOfFit.f)}, ${pWords(line.lackOfFit.p)}` },
    { label: 'R²', value: line.r2, text: shown(line.r2, 6) },
    { label: 'Intercept without the blank, less the blank', value: blank?.difference_per_s ?? null, text: blank === null ? 'no blank to compare' : `${shown(blank.difference_per_s, 2)} s^-1${blank.p === null ? '' : `, ${pWords(blank.p)}`}` },
    { label: `Largest rate over R_{${digit},dia}`, value: line.span, text: line.span === null ? 'not available: the intercept is not above 0' : shown(line.span) },
  ]
}

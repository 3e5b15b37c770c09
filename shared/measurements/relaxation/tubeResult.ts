import type { FitDone, FittedParameter } from '../../science/least-squares/outcome'
import type { NamedQuantity } from '../../evidence/quantity'
import type { AnalysedPoint, FitStatistics, SecondOpinionResult } from '../types'

/** A fitted parameter as tables show it. */
export function namedParameter({ name, label, unit, value, se, interval, atBound }: FittedParameter): NamedQuantity {
  return { name, label: inNotation(label), unit, value, kind: '=', se, interval: interval && [interval[0], interval[1]], evidenceId: null, atBound }
}

/** 'T1' as 'T_1', so that screens lower the digit. */
export const inNotation = (label: string): string => label.replace(/^([A-Z])(\d)(\*?)$/, '$1_$2$3')

/** 1/T with its error, from T with its error: se/T². The interval is that of T turned over, and so not symmetric. */
export function rateOf({ value, se, interval }: NamedQuantity, name: string, label: string): NamedQuantity {
  const ends: [number, number] | null = interval && interval[0] > 0 ? [1 / interval[1], 1 / interval[0]] : null
  return { name, label, unit: 's^-1', value: 1 / value, kind: '=', se: se === null ? null : se / value ** 2, interval: ends, evidenceId: null }
}

export function statisticsOf(fit: FitDone): FitStatistics {
  const sources = {
    known: 'given with the points', pooled: `pooled over the tubes, ${fit.intervalDof} degrees of freedom`, estimated: `from the scatter about this fit, ${fit.dof} degrees of freedom`,
  } as const
  const size = fit.sigma === null ? '' : `${Number(fit.sigma.toPrecision(3))} au, `
  return {
    rss: fit.rss, dof: fit.dof, reducedChi2: fit.reducedChi2, aicc: fit.aicc, r2: fit.r2, condition: fit.condition, evaluations: fit.evaluations, stop: fit.stop,
    sigma: `${size}${sources[fit.sigmaUsed]}`,
  }
}

export function secondOpinionOf(fit: FitDone): SecondOpinionResult | null {
  const other = fit.secondOpinion
  if (other === null) return null
  const ours = fit.sigmaUsed === 'known' && fit.reducedChi2 !== null ? fit.reducedChi2 * fit.dof : fit.rss
  const relativeDifference = ours > 0 && Number.isFinite(other.sumOfSquares) ? (other.sumOfSquares - ours) / ours : null
  const note = other.agrees ? 'A second program, started from this optimum and from the model\'s own start, found no lower sum of squares.' : 'A second program found a lower sum of squares: this fit is not at its lowest point.'
  return { rss: Number.isFinite(other.sumOfSquares) ? other.sumOfSquares : null, relativeDifference, lower: !other.agrees, note }
}

/** Points with fit and residuals. `reasons` gives the reason of each point left out, by index. */
export function analysedPoints(x: readonly number[], y: readonly number[], fit: FitDone | null, reasons: ReadonlyMap<number, string>): AnalysedPoint[] {
  return x.map((value, index) => {
    const fitted = fit?.fitted[index] ?? null
    const signal = y[index] ?? Number.NaN
    return {
      index, x: value, y: signal, fitted, residual: fitted === null ? null : signal - fitted, studentised: fit?.studentised[index] ?? null, excluded: reasons.get(index) ?? null,
    }
  })
}

/** A test that was passed, with what it saw: 'Outlier: no. Point 3 has the largest ...'. */
export const passedText = (title: string, detail: string | null): string => `${title}: no.${detail ? ` ${detail}` : ''}`

const CURVE_POINTS = 65
/** Curves are for the eye: figures show no more digits. */
const CURVE_DIGITS = 6
/** Powers of ten that a double holds exactly. */
const EXACT_POWERS = 22
const POWERS_OF_TEN = Array.from({ length: EXACT_POWERS + 1 }, (_, n) => Number(`1e${n}`))

/** Model values from 0 to the last point, denser where a recovery bends: spaced by the square of their index. */
export function curveOver(x: readonly number[], evaluate: (x: number) => number): { x: number, y: number }[] {
  const end = Math.max(...x)
  if (!(end > 0)) return []
  return Array.from({ length: CURVE_POINTS }, (_, i) => {
    const at = end * (i / (CURVE_POINTS - 1)) ** 2
    return { x: forTheEye(at), y: forTheEye(evaluate(at)) }
  })
}

/** To so many significant digits, by a power of ten: a detour over text takes longer than the fit. */
function forTheEye(value: number): number {
  const shift = CURVE_DIGITS - 1 - Math.floor(Math.log10(Math.abs(value)))
  if (!(Math.abs(shift) <= EXACT_POWERS)) return value
  return shift >= 0 ? Math.round(value * POWERS_OF_TEN[shift]!) / POWERS_OF_TEN[shift]! : Math.round(value / POWERS_OF_TEN[-shift]!) * POWERS_OF_TEN[-shift]!
}

import type { EvidenceDraft } from '../../evidence/types'
import type { AnalysisInput, AnalysisOutcome, Conditions, Flag, TubeResult } from '../types'
import { optionOf } from '../fitOptions'
import { fitBinding, withBinding } from './binding'
import { evidenceConditions } from './conditions'
import { LINE_OPTION } from './options'
import { fitSlope, lineSeLabel, QUADRATIC_LABEL } from './slope'
import { ratesFrom } from './tubeRate'

interface Parts {
  input: AnalysisInput
  tubes: TubeResult[]
  digit: '1' | '2'
  /** Flags that the kind adds to those of the line. */
  flags: readonly Flag[]
  method: (used: readonly TubeResult[]) => string
}

/** Outcome of a series from its tubes: slope, flags, sentence; or the refusal, with the tubes as far as they got. */
export function seriesOutcome({ input, tubes, digit, flags, method }: Parts): AnalysisOutcome {
  const slope = fitSlope(ratesFrom(input.tubes, tubes, `rate${digit}_per_s`), input.conditions, digit)
  if (!slope.ok) return { ...slope, tubes }
  const binding = optionOf(input, LINE_OPTION) === 'binding' ? fitBinding(slope.used, input.conditions) : null
  const used = tubes.filter(tube => slope.used.some(rate => rate.tubeNo === tube.tubeNo))
  return {
    ok: true, tubes, series: binding === null ? slope.series : withBinding(slope.series, binding), flags: [...slope.flags, ...binding?.flags ?? [], ...flags], passed: slope.passed,
    method: `${method(used)}${binding?.method ?? ''}`,
  }
}

/** What a series says about its agent: one relaxivity, with the error its stock shares with other series. */
export function relaxivityEvidence(outcome: Extract<AnalysisOutcome, { ok: true }>, { conditions, tubes }: AnalysisInput): EvidenceDraft[] {
  const { headline, points, parameters, statistics } = outcome.series
  const { name, value, kind, se, interval, unit } = headline
  const used = points.filter(point => point.excluded === null)
  const dia = parameters.find(parameter => parameter.name.endsWith('Dia_per_s'))
  const fitSe = statistics.find(({ label }) => label === lineSeLabel(name.charAt(1)))?.value ?? null
  const quadraticP = statistics.find(({ label }) => label === QUADRATIC_LABEL)?.value ?? null
  return [{
    quantity: name, value: { value, kind, se, interval, unit }, conditions: evidenceConditions(conditions), covarianceGroup: stockGroup(conditions),
    detail: {
      nTubes: used.length, nTubesLeftOut: points.length - used.length, nPoints: outcome.tubes.reduce((sum, tube) => sum + tube.points.filter(point => point.excluded === null).length, 0),
      preparations: typeof conditions.preparations === 'number' ? conditions.preparations : 1, hasBlank: tubes.some(tube => tube.role === 'blank'),
      fitSe, quadraticP, lowestConc_mM: Math.min(...used.map(point => point.x)), highestConc_mM: Math.max(...used.map(point => point.x)),
      diamagneticRate_per_s: dia?.value ?? null, diamagneticRateSe_per_s: dia?.se ?? null,
    },
  }]
}

/** Series made from one stock share its error. The group is named within the batch; whoever stores it puts the batch before it. */
function stockGroup({ stock, concScaleError_frac }: Conditions): EvidenceDraft['covarianceGroup'] {
  if (typeof concScaleError_frac !== 'number' || concScaleError_frac === 0) return null
  return { id: `stock:${typeof stock === 'string' ? stock.trim().toLowerCase() : ''}`, scaleFraction: concScaleError_frac }
}

import type { AnalysisInput, Flag } from '../types'
import type { Told } from './analyse'

const WORDS: Readonly<Record<string, string>> = { ML: 'log K of ML', MHL: 'the protonated complex MHL', MLOH: 'the hydroxo complex ML(OH)' }

/** χ²/dof above which the errors, or the model, are not what was assumed (common practice, no source). */
const POOR = 3

/** What to look at before the constants are believed. */
export function titrationFlags({ conditions }: AnalysisInput, { done, counted, calibrations }: Told): Flag[] {
  const flag = (id: string, title: string, sentence: string): Flag => ({ id, title, sentence, tubeNo: null })
  const { fit, open } = done
  const usesMV = counted.some(one => one.plan.readings === 'mV')
  const carbonate = calibrations.flatMap(one => one.found?.carbonate_M === null || one.found === null ? [] : [one.found.carbonate_M / one.found.base_M])
  const top = Math.max(...counted.flatMap(one => one.plan.role === 'complex' ? done.fit.curves[counted.indexOf(one)]!.fitted_pcH : []))
  return [
    ...open.map((one) => {
      const what = WORDS[one.name] ?? `log K of ${one.name}`
      if (one.kind === 'none') return flag('notDeterminable', 'Not determinable', `The curves say nothing of ${what}: it is left out of the refinement, or stays as typed. Measure where it forms.`)
      return flag('notDeterminable', 'Not determinable', `The curves give only a bound on ${what} (one-sided 95 %, from the profile of chi-square): log β ${one.kind === '<' ? 'at most' : 'at least'} ${one.bound.toFixed(2)}. ${one.kind === '<' ? 'It may be absent.' : 'It is formed whole wherever was measured; a competing ligand, or batch points in more acid, would show more.'}`)
    }),
    ...((fit.reducedChi2 ?? 0) > POOR ? [flag('poorFit', 'Residuals beyond the errors', `Chi-square per degree of freedom is ${fit.reducedChi2!.toPrecision(3)}: the errors of readings and volumes are larger than stated, an amount is off, or a species is missing. Standard errors are widened by it.`)] : []),
    ...(fit.covariance === null ? [flag('noErrors', 'No standard errors', 'The constants cannot be told apart by these curves, so no errors exist. Hold one of them, or measure where they differ.')] : []),
    ...(conditions.pHScale === 'activity' && !usesMV ? [flag('activityPH', 'pH is an activity', 'The constants need −log[H]; at 0.1 M an electrode reads about 0.1 apart, which moves every stepwise constant by as much. Calibrate with strong acid where you can.')] : []),
    ...(carbonate.some(share => share > 0.02) ? [flag('carbonate', 'Carbonate in the base', `The Gran ends of the calibration part by ${(200 * Math.max(...carbonate)).toFixed(1)} % of the base: it holds carbonate. State it among the conditions, or make fresh base.`)] : []),
    ...(top > 9 && (conditions.metalHydroxide ?? null) === null && open.some(one => one.name === 'ML') ? [flag('noHydroxides', 'No hydroxides of the metal', 'Points reach beyond pH 9 and no hydroxide of the metal is considered.')] : []),
  ]
}

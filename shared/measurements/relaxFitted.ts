import { describeConditions } from './relaxation/conditions'
import { checkExclusions } from './relaxation/exclusions'
import { checkFittedTubes, FITTED_COLUMNS, FITTED_CONDITIONS } from './relaxation/fittedForm'
import { readFittedTubes, relaxationNames } from './relaxation/fittedTubes'
import { seriesFigureOf, tubeFigureOf, type FigureWords } from './relaxation/figures'
import { conditionsText, engineText, leftOutText, slopeText, tubesText } from './relaxation/methodText'
import { relaxivityEvidence, seriesOutcome } from './relaxation/seriesOutcome'
import { FITTED_TEMPLATES } from './templates/fitted'
import { defineMeasurement, type AnalysisInput, type TubeResult } from './types'

/** The one model of a table of results: repeats of a tube become their mean. */
const MEAN_OF_TUBE = { id: 'meanOfTube', version: 1, title: 'Values as given, repeats averaged' }

function wordsFor(digit: '1' | '2'): FigureWords {
  return {
    token: digit === '1' ? 't1' : 't2', tube: { x: { label: 'Repeat', unit: null }, y: { label: `T_${digit} or R_${digit} as given`, unit: null } },
    rate: { label: `R_${digit}`, unit: 's^-1' }, caption: 'Values as given in the file.',
  }
}

/** Tables of T1, T2, R1 or R2 fitted elsewhere, with or without standard errors. */
export const relaxFitted = defineMeasurement({
  kind: 'relax.fitted',
  version: 1,
  title: 'Fitted T1 or T2 per tube',
  purpose: 'A table of T1, T2, R1 or R2 per tube, fitted elsewhere, with or without standard errors; gives r1 or r2.',
  columns: FITTED_COLUMNS,
  conditions: FITTED_CONDITIONS,
  layouts: ['long', 'columnPerTube'],
  templates: FITTED_TEMPLATES,
  models: [MEAN_OF_TUBE],
  defaultModel: () => MEAN_OF_TUBE.id,
  checkTubes: checkFittedTubes,
  analyse(input) {
    checkExclusions(input.tubes, input.exclusions)
    const { digit } = relaxationNames(input.conditions.quantity)
    return seriesOutcome({ input, tubes: readFittedTubes(input), digit, flags: [], method: used => methodOf(input, used, digit) })
  },
  evidence: relaxivityEvidence,
  describe: conditions => describeConditions(`r_${relaxationNames(conditions.quantity).digit}`, conditions),
  seriesFigure: outcome => seriesFigureOf(outcome, wordsFor(outcome.ok && outcome.series.headline.name.startsWith('r2') ? '2' : '1')),
  tubeFigure: tube => tubeFigureOf(tube, wordsFor(tube.headline?.name === 't2_s' ? '2' : '1')),
})

function methodOf(input: AnalysisInput, used: readonly TubeResult[], digit: '1' | '2'): string {
  const { sequence, fittedWith } = input.conditions
  const how = [typeof sequence === 'string' ? sequence : null, typeof fittedWith === 'string' ? `fitted with ${fittedWith}` : null].filter(part => part !== null)
  return `T${digit} of ${tubesText(used)}, was given as fitted elsewhere${how.length > 0 ? ` (${how.join(', ')})` : ''}${conditionsText(input.conditions)}. `
    + slopeText(digit, used, input) + leftOutText(input) + engineText()
}

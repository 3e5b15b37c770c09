import { findModel, MODELS } from '../science/models'
import { describeConditions } from './relaxation/conditions'
import { checkExclusions } from './relaxation/exclusions'
import { seriesFigureOf, tubeFigureOf, type FigureWords } from './relaxation/figures'
import { conditionsText, engineText, leftOutText, slopeText, tubesText } from './relaxation/methodText'
import { checkRecoveryTubes, RECOVERY_COLUMNS, RECOVERY_CONDITIONS } from './relaxation/recoveryForm'
import { recoveryFlags } from './relaxation/recoveryFlags'
import { fitRecoveryTubes, recoveryModelFor } from './relaxation/recoveryTubes'
import { relaxivityEvidence, seriesOutcome } from './relaxation/seriesOutcome'
import { RECOVERY_TEMPLATES } from './templates/recovery'
import { defineMeasurement, type AnalysisInput, type TubeResult } from './types'

const WORDS: FigureWords = {
  token: 't1', tube: { x: { label: 'TI', unit: 's' }, y: { label: 'Signal', unit: 'au' } }, rate: { label: 'R_1', unit: 's^-1' },
  caption: 'Where the signals are magnitudes, their signs are restored.',
}

/** T1 by inversion recovery: a phantom of tubes, inversion times, signed or magnitude signals. */
export const relaxT1Ir = defineMeasurement({
  kind: 'relax.t1.ir',
  version: 1,
  title: 'T1, inversion recovery',
  purpose: 'Signals of a phantom against inversion time, signed or magnitude; gives T1 of every tube and r1.',
  columns: RECOVERY_COLUMNS,
  conditions: RECOVERY_CONDITIONS,
  layouts: ['columnPerTube', 'long', 'rowPerTube'],
  templates: RECOVERY_TEMPLATES,
  models: Object.values(MODELS).map(({ id, version, title }) => ({ id, version, title, within: id === 'inversionRecovery3' ? [] : ['inversionRecovery3'] })),
  defaultModel: recoveryModelFor,
  checkTubes: checkRecoveryTubes,
  analyse(input) {
    checkExclusions(input.tubes, input.exclusions)
    const tubes = fitRecoveryTubes(input)
    return seriesOutcome({ input, tubes, digit: '1', flags: recoveryFlags(input), method: used => methodOf(input, used) })
  },
  evidence: relaxivityEvidence,
  describe: conditions => describeConditions('r_1', conditions),
  seriesFigure: outcome => seriesFigureOf(outcome, WORDS),
  tubeFigure: tube => tubeFigureOf(tube, WORDS),
})

function methodOf(input: AnalysisInput, used: readonly TubeResult[]): string {
  const model = findModel(input.modelId)
  const tis = used.flatMap(tube => tube.points.map(point => point.x))
  const times = `${new Set(tis).size} inversion times from ${Math.min(...tis)} to ${Math.max(...tis)} s`
  const form = input.conditions.signalForm === 'magnitude' ? 'magnitudes, polarity restored by the smallest residual sum of squares (Barral et al. 2010)' : 'signed signals'
  return `T1 of ${tubesText(used)}, was measured by inversion recovery${conditionsText(input.conditions)} (${times}; ${form}) and fitted with ${model?.equation ?? input.modelId}. `
    + slopeText('1', used, input) + leftOutText(input) + engineText()
}

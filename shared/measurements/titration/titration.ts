import { checkExclusions } from '../relaxation/exclusions'
import { TITRATION_TEMPLATES } from '../templates/titration'
import { defineMeasurement } from '../types'
import { analyseTitration } from './analyse'
import { checkTitration } from './checks'
import { TITRATION_COLUMNS } from './columns'
import { describeTitration, TITRATION_CONDITIONS } from './conditions'
import { titrationEvidence } from './evidence'
import { curveFigure, residualFigure } from './figures'
import { registeredConstants } from './registered'
import { TITRATION_MODELS, TITRATION_OPTIONS } from './options'

/** pH or mV against base: calibration of the electrode, and constants refined over ligand, complex and batch curves together. */
export const thermoTitration = defineMeasurement({
  kind: 'thermo.titration',
  version: 1,
  title: 'Titrations, stability constants',
  purpose: 'pH or mV against base for strong acid, ligand and complex, or batch points; gives protonation constants and log K.',
  columns: TITRATION_COLUMNS,
  labelsName: 'course',
  concFrom: 'ligandConc_mM',
  seriesWords: { title: 'Constants', note: 'refined over all curves together' },
  conditions: TITRATION_CONDITIONS,
  layouts: ['long', 'columnPerTube'],
  templates: TITRATION_TEMPLATES,
  models: TITRATION_MODELS,
  defaultModel: () => 'titrationML',
  options: TITRATION_OPTIONS,
  registered: registeredConstants,
  checkTubes: checkTitration,
  analyse(input) {
    checkExclusions(input.tubes, input.exclusions)
    return analyseTitration(input)
  },
  evidence: titrationEvidence,
  describe: describeTitration,
  seriesFigure: residualFigure,
  tubeFigure: curveFigure,
})

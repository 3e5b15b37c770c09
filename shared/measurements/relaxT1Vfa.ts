import { FLIP_FLAGS } from '../science/relaxometry/tubeFlags'
import { SAMPLE_CONDITIONS } from './relaxation/conditions'
import { TUBE_COLUMNS } from './relaxation/columns'
import { signalKind } from './relaxation/kinds'
import { proposeAngles } from './relaxation/propose'
import { settingsFrom } from './relaxation/settings'
import { NOISE_CONDITIONS, REGION_COLUMNS, SEQUENCE, SIGNAL_COLUMN, SIGNAL_SD_COLUMN } from './relaxation/signalColumns'
import { numbersOf, signalProblems, type SignalWords } from './relaxation/signalProblems'
import { tubeSetProblems } from './relaxation/tubeSet'
import { asks } from './tabular/problem'
import { FLIP_TEMPLATES } from './templates/flip'
import { defineMeasurement, type AnalysisInput, type Flag, type SeriesTube, type UploadProblem } from './types'

const WORDS: SignalWords = { field: 'flip_rad', stem: 'flip', label: 'flip angle', plural: 'flip angles', leastPoints: 3, result: 'T1', usual_s: [0, Infinity], usualWords: '', mayDip: false }
const DEGREE = Math.PI / 180

/** Radians and degrees taken for each other. */
function angleProblems(tubes: readonly SeriesTube[]): UploadProblem[] {
  const largest = tubes.flatMap(tube => numbersOf(tube, 'flip_rad')).reduce((most, angle) => Math.max(most, angle), 0)
  if (largest === 0 || (largest <= Math.PI && largest >= 2 * DEGREE)) return []
  return [asks('angleUnit', `The largest flip angle is ${Number((largest / DEGREE).toPrecision(4))}°.`, 'another unit for the flip angle, if it was taken wrongly; angles from 1° to 90° are usual', { field: 'units.flip' })]
}

function b1Flag({ tubes }: AnalysisInput): Flag[] {
  if (tubes.every(tube => numbersOf(tube, 'b1Scale').length > 0)) return []
  return [{ id: 'noB1', title: 'B1 not given for every tube', sentence: 'Where it is not given the nominal angle is taken for the true one; 5 % of B1 is about 10 % of T1. Measure a B1 map, or give the B1 scale of each tube.', tubeNo: null }]
}

/** T1 by variable flip angle: steady-state signals of a spoiled gradient echo. */
export const relaxT1Vfa = defineMeasurement(signalKind({
  kind: 'relax.t1.vfa',
  version: 1,
  title: 'T1, variable flip angle',
  purpose: 'Steady-state signals of a spoiled gradient echo against flip angle, with the B1 scale of each tube; gives T1 of every tube and r1.',
  digit: '1',
  columns: [
    ...TUBE_COLUMNS,
    {
      stem: 'flip', field: 'flip_rad', label: 'Flip angle', dimension: 'angle', role: 'x', required: true, above: 0, help: 'Nominal flip angle; the same one twice is a repeat',
      synonyms: ['flip angle', 'flip angles', 'flip', 'fa', 'alpha', 'α', 'angle', 'nominal flip angle'],
    },
    SIGNAL_COLUMN, SIGNAL_SD_COLUMN, ...REGION_COLUMNS,
    {
      stem: 'b1Scale', field: 'b1Scale', label: 'B1 scale', dimension: 'fraction', role: 'aux', required: false, min: 0.1, max: 3, help: 'True flip angle over nominal in this tube, from a B1 map; 1 or 100 % where they agree',
      synonyms: ['b1', 'b1 scale', 'b1 factor', 'b1 map', 'relative b1', 'b1+', 'kappa', 'b1 ratio', 'b1 correction'],
    },
  ],
  conditions: [
    ...SAMPLE_CONDITIONS, SEQUENCE,
    { key: 'tr_s', label: 'TR', type: 'number', dimension: 'time', shownUnit: 'ms', required: true, min: 1e-4, max: 100, help: 'From one pulse to the next', synonyms: ['tr', 'repetition time'] },
    { key: 'te_s', label: 'TE', type: 'number', dimension: 'time', shownUnit: 'ms', required: false, min: 1e-5, max: 10, help: 'The same for all angles; short against T2* of the most concentrated tube', synonyms: ['te', 'echo time'] },
    { key: 'spoiling', label: 'Spoiling', type: 'text', required: false, help: 'Phase increment and gradient', synonyms: ['spoiling', 'rf spoiling', 'phase increment'] },
    ...NOISE_CONDITIONS,
  ],
  templates: FLIP_TEMPLATES,
  models: [{ id: 'variableFlipAngle' }],
  defaultModel: () => 'variableFlipAngle',
  checkTubes: (tubes, conditions) => [...tubeSetProblems(tubes), ...tubes.flatMap(tube => signalProblems(tube, conditions, WORDS)), ...angleProblems(tubes)],
  propose: proposeAngles,
  words: { token: 't1', tube: { x: { label: 'Flip angle', unit: 'rad' }, y: { label: 'Signal', unit: 'au' } }, rate: { label: 'R_1', unit: 's^-1' }, caption: '' },
  signals: {
    x: 'flip_rad', y: ['signal_au'], time: 't1_s', rate: { name: 'rate1_per_s', label: 'R_1' }, flags: FLIP_FLAGS, knowsBlank: true,
    settings: settingsFrom({ tr_s: 'tr_s' }, { b1Scale: 'b1Scale' }), signal: () => 'signed',
  },
  flags: b1Flag,
  sequenceText: ({ conditions: { tr_s } }) => `a spoiled gradient echo at several flip angles${typeof tr_s === 'number' ? `, TR ${Number((1e3 * tr_s).toPrecision(4))} ms` : ''}`,
  sampling: { plural: 'flip angles', unit: '°', per: 1 / DEGREE },
}))

import { INVERSION_FLAGS } from '../science/relaxometry/tubeFlags'
import { SAMPLE_CONDITIONS } from './relaxation/conditions'
import { TUBE_COLUMNS } from './relaxation/columns'
import { signalKind } from './relaxation/kinds'
import { proposeRecovery } from './relaxation/propose'
import { NOISE_CONDITIONS, REGION_COLUMNS, SEQUENCE, SIGNAL_COLUMN, SIGNAL_FORM, SIGNAL_SD_COLUMN } from './relaxation/signalColumns'
import { signalProblems, timeProblems, type SignalWords } from './relaxation/signalProblems'
import { tubeSetProblems } from './relaxation/tubeSet'
import { LOOK_LOCKER_TEMPLATES } from './templates/lookLocker'
import { defineMeasurement, type AnalysisInput, type Flag } from './types'

const WORDS: SignalWords = { field: 'ti_s', stem: 'ti', label: 'time', plural: 'times after inversion', leastPoints: 4, result: 'T1', usual_s: [0.005, 60], usualWords: 'trains up to a minute are usual', mayDip: true }

function angleFlag({ conditions: { readoutAngle_rad: angle } }: AnalysisInput): Flag[] {
  if (typeof angle !== 'number' || angle <= 20 * Math.PI / 180) return []
  return [{ id: 'largeAngle', title: 'Read-out angle above 20°', sentence: `The pulses of the train turn by ${Math.round(angle * 180 / Math.PI)}°; T1 = T1*·(b/a − 1) holds for small angles. Compare with inversion recovery.`, tubeNo: null }]
}

/** T1 by Look–Locker: one inversion and a train of small read-out pulses. */
export const relaxT1Ll = defineMeasurement(signalKind({
  kind: 'relax.t1.ll',
  version: 1,
  title: 'T1, Look–Locker',
  purpose: 'Signals of a train of small pulses after one inversion; gives T1* and T1 of every tube and r1.',
  digit: '1',
  columns: [
    ...TUBE_COLUMNS,
    {
      stem: 'ti', field: 'ti_s', label: 'Time', dimension: 'time', role: 'x', required: true, min: 0, help: 'From the inversion to the pulse; the same one twice is a repeat',
      synonyms: ['ti', 'time after inversion', 'inversion time', 'inversion times', 'effective ti', 'time', 't', 'delay'],
    },
    SIGNAL_COLUMN, SIGNAL_SD_COLUMN, ...REGION_COLUMNS,
  ],
  conditions: [
    ...SAMPLE_CONDITIONS, SEQUENCE,
    { key: 'readoutAngle_rad', label: 'Read-out angle', type: 'number', dimension: 'angle', shownUnit: '°', required: true, min: 0.001, max: Math.PI / 2 + 0.001, help: 'Of each pulse of the train', synonyms: ['readout angle', 'read out angle', 'flip angle', 'excitation angle'] },
    { key: 'readoutSpacing_s', label: 'Pulse spacing', type: 'number', dimension: 'time', shownUnit: 'ms', required: false, min: 1e-5, max: 100, help: 'From one pulse of the train to the next', synonyms: ['pulse spacing', 'readout spacing', 'tr', 'tau', 'spacing'] },
    { key: 'relaxationDelay_s', label: 'Wait before the inversion', type: 'number', dimension: 'time', shownUnit: 's', required: false, min: 0, max: 1e4, help: 'From the last pulse to the next inversion; at least 5 T1', synonyms: ['relaxation delay', 'delay time', 'wait', 'recovery delay'] },
    SIGNAL_FORM, ...NOISE_CONDITIONS,
  ],
  templates: LOOK_LOCKER_TEMPLATES,
  models: [{ id: 'lookLocker' }],
  defaultModel: () => 'lookLocker',
  checkTubes: (tubes, conditions) => [...tubeSetProblems(tubes), ...tubes.flatMap(tube => signalProblems(tube, conditions, WORDS)), ...timeProblems(tubes, WORDS)],
  propose: proposeRecovery,
  words: {
    token: 't1', tube: { x: { label: 'Time after inversion', unit: 's' }, y: { label: 'Signal', unit: 'au' } }, rate: { label: 'R_1', unit: 's^-1' },
    caption: 'Where the signals are magnitudes, their signs are restored.',
  },
  signals: {
    x: 'ti_s', y: ['signal_au'], time: 't1_s', rate: { name: 'rate1_per_s', label: 'R_1' }, flags: INVERSION_FLAGS, knowsBlank: true,
    settings: () => ({}), signal: (_model, { signalForm }) => signalForm === 'magnitude' ? 'magnitude' : 'signed',
  },
  flags: angleFlag,
  sequenceText: ({ conditions: { readoutAngle_rad: angle } }) => `a Look–Locker train${typeof angle === 'number' ? ` of ${Number((angle * 180 / Math.PI).toPrecision(3))}° pulses` : ''}`,
  formText: ({ conditions }) => conditions.signalForm === 'magnitude' ? 'magnitudes, polarity restored by the smallest residual sum of squares' : 'signed signals',
  sampling: { plural: 'times after inversion', unit: 's', per: 1 },
}))

import type { ColumnSpec, Conditions, ConditionSpec, SeriesTube, UploadProblem } from '../types'
import { blocks, quoted } from '../tabular/problem'
import { SAMPLE_CONDITIONS } from './conditions'
import { TUBE_COLUMNS } from './columns'
import { NOISE_CONDITIONS, REGION_COLUMNS, SEQUENCE, SIGNAL_COLUMN, SIGNAL_FORM, SIGNAL_SD_COLUMN } from './signalColumns'
import { numbersOf, signalProblems, timeProblems, type SignalWords } from './signalProblems'
import { tubeSetProblems } from './tubeSet'

export const RECOVERY_COLUMNS: readonly ColumnSpec[] = [
  ...TUBE_COLUMNS,
  {
    stem: 'ti', field: 'ti_s', label: 'TI', dimension: 'time', role: 'x', required: true, min: 0, help: 'Inversion time; the same one twice is a repeat',
    synonyms: ['ti', 'inversion time', 'inversion times', 'inversion delay', 'inversion recovery time', 'recovery time', 'delay', 'time', 't', 'tau'],
  },
  SIGNAL_COLUMN, SIGNAL_SD_COLUMN, ...REGION_COLUMNS,
]

export const RECOVERY_CONDITIONS: readonly ConditionSpec[] = [
  ...SAMPLE_CONDITIONS,
  SEQUENCE,
  {
    key: 'timing', label: 'Timing', type: 'choice', required: true, help: 'What stays the same when TI changes', synonyms: ['timing', 'sequence timing', 'repetition'],
    choices: [
      { value: 'longTr', label: 'TR much longer than T1 (at least 5 T1)', synonyms: ['long tr', 'fully relaxed'] },
      { value: 'inversionToInversion', label: 'constant TR from inversion to inversion', synonyms: ['constant tr', 'inversion to inversion', 'tr'] },
      { value: 'constantDelay', label: 'constant delay after the read-out', synonyms: ['constant delay', 'delay', 'td'] },
    ],
  },
  {
    key: 'tr_s', label: 'TR', type: 'number', dimension: 'time', shownUnit: 's', required: true, min: 1e-3, max: 1e4, help: 'From one inversion to the next',
    synonyms: ['tr', 'repetition time'], when: { key: 'timing', is: ['inversionToInversion'] },
  },
  {
    key: 'td_s', label: 'Delay after read-out', type: 'number', dimension: 'time', shownUnit: 's', required: true, min: 1e-3, max: 1e4, help: 'From the read-out to the next inversion',
    synonyms: ['td', 'delay time', 'recovery delay', 'relaxation delay'], when: { key: 'timing', is: ['constantDelay'] },
  },
  {
    key: 'readoutAngle_rad', label: 'Read-out angle', type: 'number', dimension: 'angle', shownUnit: '°', required: false, min: 0.01, max: Math.PI / 2 + 0.001, help: 'The finite-TR models hold for 90°; left open, 90° is assumed and said so',
    synonyms: ['readout angle', 'read out angle', 'flip angle', 'excitation angle'],
  },
  {
    key: 'inversionAngle_rad', label: 'Inversion angle', type: 'number', dimension: 'angle', shownUnit: '°', required: false, min: Math.PI / 2, max: 1.5 * Math.PI, help: 'Only if it is known; 180° otherwise',
    synonyms: ['inversion angle', 'inversion flip angle'], when: { key: 'timing', is: ['inversionToInversion', 'constantDelay'] },
  },
  SIGNAL_FORM, ...NOISE_CONDITIONS,
]

/** What is wrong with inversion-recovery tubes beyond single cells. */
export function checkRecoveryTubes(tubes: readonly SeriesTube[], conditions: Conditions): UploadProblem[] {
  return [
    ...tubeSetProblems(tubes), ...tubes.flatMap(tube => [...signalProblems(tube, conditions, INVERSION_WORDS), ...timingProblems(tube, conditions)]),
    ...timeProblems(tubes, INVERSION_WORDS),
  ]
}

const INVERSION_WORDS: SignalWords = { field: 'ti_s', label: 'TI', stem: 'ti', plural: 'inversion times', leastPoints: 4, result: 'T1', usual_s: [0.005, 60], usualWords: 'inversion times up to a minute are usual', mayDip: true }

function timingProblems(tube: SeriesTube, { timing, tr_s }: Conditions): UploadProblem[] {
  const longest = Math.max(...numbersOf(tube, 'ti_s'))
  if (timing !== 'inversionToInversion' || typeof tr_s !== 'number' || !(longest > tr_s)) return []
  return [blocks('impossibleTiming', `Tube ${quoted(tube.label)} has TI ${longest} s, longer than TR ${tr_s} s from inversion to inversion.`, 'TR at least as long as the longest TI; or is it the delay after the read-out that was constant?', { field: 'conditions.tr_s' })]
}

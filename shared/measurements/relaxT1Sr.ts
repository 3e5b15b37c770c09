import { SATURATION_FLAGS } from '../science/relaxometry/tubeFlags'
import { SAMPLE_CONDITIONS } from './relaxation/conditions'
import { TUBE_COLUMNS } from './relaxation/columns'
import { signalKind } from './relaxation/kinds'
import { proposeRecovery } from './relaxation/propose'
import { NOISE_CONDITIONS, REGION_COLUMNS, SEQUENCE, SIGNAL_COLUMN, SIGNAL_FORM, SIGNAL_SD_COLUMN } from './relaxation/signalColumns'
import { signalProblems, timeProblems, type SignalWords } from './relaxation/signalProblems'
import { tubeSetProblems } from './relaxation/tubeSet'
import { SATURATION_TEMPLATES } from './templates/saturation'
import { defineMeasurement } from './types'

const WORDS: SignalWords = { field: 'tr_s', stem: 'tr', label: 'TR', plural: 'recovery times', leastPoints: 4, result: 'T1', usual_s: [0.005, 100], usualWords: 'recovery times up to a minute are usual', mayDip: false }

/** T1 by saturation recovery: signals against repetition time or delay after saturation. */
export const relaxT1Sr = defineMeasurement(signalKind({
  kind: 'relax.t1.sr',
  version: 1,
  title: 'T1, saturation recovery',
  purpose: 'Signals of a phantom against repetition time or delay after saturation; gives T1 of every tube and r1.',
  digit: '1',
  columns: [
    ...TUBE_COLUMNS,
    {
      stem: 'tr', field: 'tr_s', label: 'TR', dimension: 'time', role: 'x', required: true, min: 0, help: 'Repetition time, or delay after the saturation; the same one twice is a repeat',
      synonyms: ['tr', 'repetition time', 'repetition times', 'recovery time', 'saturation delay', 'delay', 'recovery delay', 'ts', 'tsat', 'time', 't'],
    },
    SIGNAL_COLUMN, SIGNAL_SD_COLUMN, ...REGION_COLUMNS,
  ],
  conditions: [
    ...SAMPLE_CONDITIONS, SEQUENCE,
    {
      key: 'timing', label: 'What TR is', type: 'choice', required: true, help: 'From where to where the time in the table runs', synonyms: ['timing', 'sequence timing', 'repetition'],
      choices: [
        { value: 'repetition', label: 'from one 90° excitation to the next', synonyms: ['repetition', 'tr', 'excitation to excitation', 'repetition time'] },
        { value: 'delay', label: 'from the saturation to the read-out', synonyms: ['delay', 'saturation delay', 'after saturation'] },
      ],
    },
    {
      key: 'readoutAngle_rad', label: 'Read-out angle', type: 'number', dimension: 'angle', shownUnit: '°', required: false, min: 0.01, max: Math.PI / 2 + 0.001, help: 'With the time from excitation to excitation the model holds for 90°',
      synonyms: ['readout angle', 'read out angle', 'flip angle', 'excitation angle'],
    },
    SIGNAL_FORM, ...NOISE_CONDITIONS,
  ],
  templates: SATURATION_TEMPLATES,
  models: [{ id: 'saturationRecovery', within: ['saturationRecoveryOffset'] }, { id: 'saturationRecoveryOffset' }],
  defaultModel: () => 'saturationRecovery',
  checkTubes: (tubes, conditions) => [...tubeSetProblems(tubes), ...tubes.flatMap(tube => signalProblems(tube, conditions, WORDS)), ...timeProblems(tubes, WORDS)],
  propose: proposeRecovery,
  words: { token: 't1', tube: { x: { label: 'TR', unit: 's' }, y: { label: 'Signal', unit: 'au' } }, rate: { label: 'R_1', unit: 's^-1' }, caption: '' },
  signals: {
    x: 'tr_s', y: ['signal_au'], time: 't1_s', rate: { name: 'rate1_per_s', label: 'R_1' }, flags: SATURATION_FLAGS, knowsBlank: true,
    settings: () => ({}), signal: () => 'signed',
  },
  flags: ({ conditions: { timing, readoutAngle_rad: angle } }) => timing === 'repetition' && typeof angle === 'number' && Math.abs(angle - Math.PI / 2) > 0.04
    ? [{ id: 'readoutAngle', title: 'Read-out angle is not 90°', sentence: `The read-out is ${Math.round(angle * 180 / Math.PI)}°, so part of the magnetisation is left and the recovery does not start from 0. Fit with the offset and compare, or use the variable flip angle kind.`, tubeNo: null }]
    : [],
  sequenceText: ({ conditions }) => `saturation recovery (${conditions.timing === 'delay' ? 'time from saturation to read-out' : 'time from excitation to excitation'})`,
  sampling: { plural: 'recovery times', unit: 's', per: 1 },
}))

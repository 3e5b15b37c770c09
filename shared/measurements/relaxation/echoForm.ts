import { asks, blocks, quoted } from '../tabular/problem'
import type { AnalysisInput, ColumnSpec, Conditions, ConditionSpec, Flag, SeriesTube, UploadProblem } from '../types'
import { TUBE_COLUMNS } from './columns'
import { SAMPLE_CONDITIONS } from './conditions'
import { optionOf } from '../fitOptions'
import { SKIP_ECHOES_OPTION } from './options'
import { NOISE_CONDITIONS, REGION_COLUMNS, SEQUENCE, SIGNAL_COLUMN, SIGNAL_SD_COLUMN } from './signalColumns'
import { numbersOf, signalProblems, timeProblems, type SignalWords } from './signalProblems'
import { tubeSetProblems } from './tubeSet'

const SQUARE_WORDS = ['mean square', 'mean squares', 'mean squared signal', 's^2', 's2', '<s^2>', '<s2>', '⟨s²⟩', 'mean of squares', 'mean squared magnitude']

export const ECHO_COLUMNS: readonly ColumnSpec[] = [
  ...TUBE_COLUMNS,
  {
    stem: 'te', field: 'te_s', label: 'TE', dimension: 'time', role: 'x', required: true, min: 0, help: 'Echo time; the same one twice is a repeat',
    synonyms: ['te', 'echo time', 'echo times', 'echo', 'time', 't', 'tau', 'effective te'],
  },
  { ...SIGNAL_COLUMN, required: false },
  {
    stem: 'meanSquare', field: 'meanSquare_au2', label: 'Mean square', dimension: 'signal', role: 'y', required: false, min: 0,
    help: 'Mean over the region of the squared magnitudes; not the square of the mean', synonyms: SQUARE_WORDS,
    implies: { key: 'signalForm', words: Object.fromEntries(SQUARE_WORDS.map(word => [word, 'meanSquares'])) },
  },
  SIGNAL_SD_COLUMN, ...REGION_COLUMNS,
]

export const ECHO_CONDITIONS: readonly ConditionSpec[] = [
  ...SAMPLE_CONDITIONS, SEQUENCE,
  { key: 'echoSpacing_s', label: 'Echo spacing', type: 'number', dimension: 'time', shownUnit: 'ms', required: true, min: 1e-5, max: 10, help: 'From one echo to the next: r2 of many agents depends on it', synonyms: ['echo spacing', 'spacing', 'esp', 'inter echo time', 'te spacing', 'delta te'] },
  {
    key: 'refocusingAngle_rad', label: 'Refocusing angle', type: 'number', dimension: 'angle', shownUnit: '°', required: false, min: 0.5, max: 1.2 * Math.PI, help: '180° where it is not given',
    synonyms: ['refocusing angle', 'refocusing', 'refocusing flip angle', 'refocusing pulse'],
  },
  { key: 'tr_s', label: 'TR', type: 'number', dimension: 'time', shownUnit: 's', required: false, min: 1e-3, max: 1e4, help: 'From one train to the next', synonyms: ['tr', 'repetition time'] },
  { key: 'skippedEchoes', label: 'First echoes to leave out', type: 'number', dimension: 'none', required: false, min: 0, max: 64, help: 'Counts unless the fit says otherwise', synonyms: ['skipped echoes', 'skip echoes', 'echoes left out'] },
  {
    key: 'signalForm', label: 'Form of the signal', type: 'choice', required: true, help: 'Magnitudes do not decay to zero but to the noise', synonyms: ['signal form', 'signal is', 'signal type', 'data', 'reconstruction'],
    choices: [
      { value: 'magnitude', label: 'magnitude, mean over the region', synonyms: ['modulus', 'absolute', 'mean magnitude'] }, { value: 'signed', label: 'signed (phase-corrected)', synonyms: ['signed', 'real', 'phase corrected'] },
      { value: 'meanSquares', label: 'mean over the region of squared magnitudes', synonyms: ['mean squares', 'squared'] },
    ],
  },
  { key: 'channels', label: 'Summed channels', type: 'number', dimension: 'none', required: false, min: 1, max: 128, help: 'Receivers whose squares were summed; 1 where it is not given', synonyms: ['channels', 'coil channels', 'summed channels', 'receivers'], when: { key: 'signalForm', is: ['meanSquares'] } },
  ...NOISE_CONDITIONS,
]

const WORDS: SignalWords = {
  field: 'te_s', stem: 'te', label: 'TE', plural: 'echo times', leastPoints: 3, result: 'T2', usual_s: [0.001, 10], usualWords: 'trains up to a few seconds are usual', mayDip: false, signals: ['signal_au', 'meanSquare_au2'],
}

export function checkEchoTubes(tubes: readonly SeriesTube[], conditions: Conditions): UploadProblem[] {
  return [...tubeSetProblems(tubes), ...tubes.flatMap(tube => [...signalProblems(tube, conditions, WORDS), ...formProblems(tube, conditions)]), ...spacingProblems(tubes, conditions), ...timeProblems(tubes, WORDS)]
}

/** Squares declared as magnitudes and the reverse. */
function formProblems(tube: SeriesTube, { signalForm }: Conditions): UploadProblem[] {
  const hasSquares = numbersOf(tube, 'meanSquare_au2').length > 0
  if (hasSquares === (signalForm === 'meanSquares') || tube.points.rows.length === 0) return []
  const what = hasSquares ? 'holds mean squares, and the form says otherwise' : 'holds signals, and the form says mean squares'
  return [blocks('signalForm', `Tube ${quoted(tube.label)} ${what}.`, 'the form that the column holds; the square of a mean is not a mean square', { field: 'conditions.signalForm' })]
}

/** Echoes stand at whole multiples of the spacing. */
function spacingProblems(tubes: readonly SeriesTube[], { echoSpacing_s: spacing }: Conditions): UploadProblem[] {
  if (typeof spacing !== 'number') return []
  const off = tubes.flatMap(tube => numbersOf(tube, 'te_s')).find(te => Math.abs(te / spacing - Math.round(te / spacing)) > 0.05)
  if (off === undefined) return []
  return [asks('echoSpacing', `TE ${off} s is no multiple of the echo spacing, ${spacing} s.`, 'the spacing of the train, or echo times in the unit they were taken in', { field: 'conditions.echoSpacing_s' })]
}

/** Echoes that the option, or else the condition, leaves out of every tube. */
function skipCount(input: AnalysisInput): number {
  if (input.options[SKIP_ECHOES_OPTION.key] !== undefined) return Number(optionOf(input, SKIP_ECHOES_OPTION))
  const { skippedEchoes: stated } = input.conditions
  return typeof stated === 'number' ? Math.round(stated) : Number(SKIP_ECHOES_OPTION.standard)
}

/** The first echoes of a tube by time: repeats of one echo time count as one echo. */
export function skippedEchoes(tube: SeriesTube, input: AnalysisInput): ReadonlyMap<number, string> {
  const count = skipCount(input)
  if (count <= 0) return new Map()
  const at = tube.points.columns.indexOf('te_s')
  const times = tube.points.rows.map(row => row[at] ?? Number.NaN)
  const first = [...new Set(times)].sort((a, b) => a - b).slice(0, count)
  const reason = count === 1 ? 'first echo, left out by choice' : `one of the first ${count} echoes, left out by choice`
  return new Map(times.flatMap((te, i) => first.includes(te) ? [[i, reason] as const] : []))
}

/** Flags of a multi-echo series that come from its conditions. */
export function echoFlags(input: AnalysisInput): Flag[] {
  const flags: Flag[] = []
  const { refocusingAngle_rad: angle, signalForm } = input.conditions
  if (typeof angle === 'number' && Math.abs(angle - Math.PI) > 10 * Math.PI / 180) {
    flags.push({ id: 'refocusingAngle', title: 'Refocusing angle is not 180°', sentence: `Refocusing by ${Math.round(angle * 180 / Math.PI)}° mixes stimulated echoes into the train, and T2 reads too long. Leave out the first echo, or measure with 180°.`, tubeNo: null })
  }
  const needsSquares = input.modelId === 'multiEchoMeanSquares'
  if (needsSquares !== (signalForm === 'meanSquares')) {
    flags.push({ id: 'otherModel', title: 'Model and form of the signal differ', sentence: needsSquares ? 'This model is for means of squared magnitudes only; on squared region means T2 reads 3 to 6 % low.' : 'The file holds means of squared magnitudes: their decay is twice as fast as the signal\'s. Use the model for mean squares.', tubeNo: null })
  }
  if (signalForm === 'signed' && input.modelId === 'multiEchoNoiseFloor') {
    flags.push({ id: 'otherModel', title: 'Model and form of the signal differ', sentence: 'Signed signals have no noise floor. Use the plain decay.', tubeNo: null })
  }
  return flags
}

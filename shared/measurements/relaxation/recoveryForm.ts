import type { ColumnSpec, Conditions, ConditionSpec, SeriesTube, UploadProblem } from '../types'
import { asks, blocks, quoted } from '../tabular/problem'
import { SAMPLE_CONDITIONS } from './conditions'
import { TUBE_COLUMNS } from './columns'
import { tubeSetProblems } from './tubeSet'

export const RECOVERY_COLUMNS: readonly ColumnSpec[] = [
  ...TUBE_COLUMNS,
  {
    stem: 'ti', field: 'ti_s', label: 'TI', dimension: 'time', role: 'x', required: true, min: 0, help: 'Inversion time; the same one twice is a repeat',
    synonyms: ['ti', 'inversion time', 'inversion times', 'inversion delay', 'inversion recovery time', 'recovery time', 'delay', 'time', 't', 'tau'],
  },
  {
    stem: 'signal', field: 'signal_au', label: 'Signal', dimension: 'signal', role: 'y', required: true, help: 'Mean signal of the tube, signed or magnitude',
    synonyms: ['signal', 's', 'intensity', 'signal intensity', 'si', 'mean', 'mean signal', 'mean intensity', 'magnitude', 'amplitude', 'mz', 'value'],
  },
  {
    stem: 'signalSd', field: 'signalSd_au', label: 'Signal, SD', dimension: 'signal', role: 'sigma', required: false, above: 0, follows: 'signal', help: 'Standard deviation of one mean, not of the pixels',
    synonyms: ['sd', 'signal sd', 'sd signal', 'signal se', 'signal error', 'std', 'stdev', 'standard deviation', 'sigma', 'noise', 'error', 'se'],
  },
]

export const RECOVERY_CONDITIONS: readonly ConditionSpec[] = [
  ...SAMPLE_CONDITIONS,
  { key: 'sequence', label: 'Sequence', type: 'text', required: false, help: 'Name and read-out, such as inversion recovery with spin-echo read-out', synonyms: ['sequence', 'pulse sequence', 'protocol'] },
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
  {
    key: 'signalForm', label: 'Form of the signal', type: 'choice', required: true, help: 'Magnitude data get their sign back in the fit', synonyms: ['signal form', 'signal is', 'signal type', 'data', 'reconstruction'],
    choices: [{ value: 'magnitude', label: 'magnitude', synonyms: ['modulus', 'absolute'] }, { value: 'signed', label: 'signed (phase-corrected)', synonyms: ['signed', 'real', 'phase corrected', 'phase sensitive'] }],
  },
  { key: 'noiseSigma_au', label: 'Noise, SD of one mean', type: 'number', dimension: 'signal', shownUnit: 'au', required: false, min: 1e-12, help: 'If it was measured: used as the standard deviation of every point', synonyms: ['noise', 'noise sd', 'sigma'] },
  { key: 'preparationNote', label: 'Preparation', type: 'text', required: false, help: 'How the tubes were made', synonyms: ['preparation', 'sample preparation'] },
]

/** TI and signal columns of a tube's points. */
export const tisOf = (tube: SeriesTube): number[] => tube.points.rows.flatMap(row => row[0] ?? [])
export const signalsOf = (tube: SeriesTube): number[] => tube.points.rows.flatMap(row => row[1] ?? [])

/** What is wrong with inversion-recovery tubes beyond single cells. */
export function checkRecoveryTubes(tubes: readonly SeriesTube[], conditions: Conditions): UploadProblem[] {
  return [...tubeSetProblems(tubes), ...tubes.flatMap(tube => recoveryProblems(tube, conditions)), ...timeProblems(tubes)]
}

function recoveryProblems(tube: SeriesTube, conditions: Conditions): UploadProblem[] {
  const signals = signalsOf(tube)
  const tis = tisOf(tube)
  if (signals.length === 0) return []
  const at = { field: `tubes.${tube.tubeNo}` }
  const name = `Tube ${quoted(tube.label)}`
  const problems: UploadProblem[] = []
  if (signals.length > 1 && signals.every(signal => signal === signals[0])) problems.push(blocks('constantSignal', `${name} has the same signal ${signals[0]} at every TI.`, 'signals that change with TI, or the tube put aside', at))
  else if (signals.length < 4) problems.push(asks('fewPoints', `${name} has ${signals.length} points; T1 with an error needs at least 4.`, 'more inversion times, or the tube put aside', at))
  if (conditions.signalForm === 'magnitude' && signals.some(signal => signal < 0)) {
    problems.push(blocks('negativeMagnitude', `${name} has a negative signal, and the form says magnitude.`, 'signed chosen, or magnitudes in the file', { field: 'conditions.signalForm' }))
  }
  if (conditions.signalForm === 'signed' && dipsInside(tis, signals)) {
    problems.push(asks('looksLikeMagnitude', `${name} falls and rises again without a negative signal, as magnitudes do.`, 'magnitude chosen, if that is what the file holds', { field: 'conditions.signalForm' }))
  }
  const { tr_s } = conditions
  const longest = Math.max(...tis)
  if (conditions.timing === 'inversionToInversion' && typeof tr_s === 'number' && longest > tr_s) {
    problems.push(blocks('impossibleTiming', `${name} has TI ${longest} s, longer than TR ${tr_s} s from inversion to inversion.`, 'TR at least as long as the longest TI; or is it the delay after the read-out that was constant?', { field: 'conditions.tr_s' }))
  }
  return problems
}

function dipsInside(tis: readonly number[], signals: readonly number[]): boolean {
  if (signals.some(signal => signal < 0)) return false
  const inOrder = signals.map((signal, i) => ({ signal, ti: tis[i] ?? 0 })).sort((a, b) => a.ti - b.ti).map(point => point.signal)
  const lowest = Math.min(...inOrder)
  const first = inOrder[0] ?? 0
  const last = inOrder.at(-1) ?? 0
  return lowest < 0.6 * first && lowest < 0.6 * last
}

/** Seconds and milliseconds taken for each other make inversion times that no phantom needs. */
function timeProblems(tubes: readonly SeriesTube[]): UploadProblem[] {
  const tis = tubes.flatMap(tisOf)
  const longest = Math.max(...tis, 0)
  if (tis.length === 0 || (longest <= 60 && longest >= 0.005)) return []
  return [asks('timeUnit', `The longest TI is ${longest} s.`, 'another unit for TI, if it was taken wrongly; inversion times up to a minute are usual')]
}

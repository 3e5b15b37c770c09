import type { ColumnSpec, Conditions, ConditionSpec, SeriesTube, UploadProblem } from '../types'
import { asks, quoted } from '../tabular/problem'
import { TUBE_COLUMNS } from './columns'
import { SAMPLE_CONDITIONS } from './conditions'
import { tubeSetProblems } from './tubeSet'

const errorWords = (...names: string[]): string[] => [
  'se', 'sd', 'error', 'std', 'stdev', 'standard error', 'standard deviation', 'uncertainty', 'sem', '±',
  ...names.flatMap(name => [`${name} se`, `${name} sd`, `${name} error`, `${name} std`, `${name} err`, `se ${name}`, `sd ${name}`, `d${name}`, `${name} standard error`, `${name} uncertainty`]),
]

export const FITTED_COLUMNS: readonly ColumnSpec[] = [
  ...TUBE_COLUMNS,
  {
    stem: 't', field: 't_s', label: 'T1 or T2', dimension: 'time', role: 'y', required: false, above: 0, help: 'Relaxation time of the tube; several rows of one tube are repeats',
    synonyms: ['t1', 't2', 'relaxation time', 't1 relaxation time', 't2 relaxation time', 't1 time', 't2 time', 't', 't1 mean', 't2 mean', 'mean t1', 'mean t2', 't1 obs', 't2 obs', 't1,obs', 't2,obs'],
    implies: { key: 'quantity', words: { 't1': 'T1', 't1 relaxation time': 'T1', 't1 time': 'T1', 't1 mean': 'T1', 'mean t1': 'T1', 't1 obs': 'T1', 't1,obs': 'T1', 't2': 'T2', 't2 relaxation time': 'T2', 't2 time': 'T2', 't2 mean': 'T2', 'mean t2': 'T2', 't2 obs': 'T2', 't2,obs': 'T2' } },
  },
  {
    stem: 'r', field: 'rate_per_s', label: 'R1 or R2', dimension: 'rate', role: 'y', required: false, above: 0, help: 'Relaxation rate of the tube, 1/T',
    synonyms: ['r1', 'r2', '1/t1', '1/t2', 'relaxation rate', 'r1 relaxation rate', 'r2 relaxation rate', 'rate', 'r', 'r1 obs', 'r2 obs', 'r1,obs', 'r2,obs', 'r1obs', 'r2obs'],
    implies: { key: 'quantity', words: { 'r1': 'T1', '1/t1': 'T1', 'r1 relaxation rate': 'T1', 'r1 obs': 'T1', 'r1,obs': 'T1', 'r1obs': 'T1', 'r2': 'T2', '1/t2': 'T2', 'r2 relaxation rate': 'T2', 'r2 obs': 'T2', 'r2,obs': 'T2', 'r2obs': 'T2' } },
  },
  { stem: 'tSe', field: 'tSe_s', label: 'T, standard error', dimension: 'time', role: 'sigma', required: false, above: 0, follows: 't', help: 'Standard error of the time', synonyms: errorWords('t1', 't2', 't') },
  { stem: 'rSe', field: 'rateSe_per_s', label: 'R, standard error', dimension: 'rate', role: 'sigma', required: false, above: 0, follows: 'r', help: 'Standard error of the rate', synonyms: errorWords('r1', 'r2', 'r', '1/t1', '1/t2') },
]

export const FITTED_CONDITIONS: readonly ConditionSpec[] = [
  {
    key: 'quantity', label: 'Measured', type: 'choice', required: true, help: 'Which relaxation the table holds', synonyms: ['quantity', 'measured', 'relaxation'],
    choices: [{ value: 'T1', label: 'T1 (or R1)', synonyms: ['t1', 'r1', 'longitudinal'] }, { value: 'T2', label: 'T2 (or R2)', synonyms: ['t2', 'r2', 'transverse'] }],
  },
  ...SAMPLE_CONDITIONS,
  { key: 'sequence', label: 'Sequence', type: 'text', required: false, help: 'How the times were measured', synonyms: ['sequence', 'pulse sequence', 'protocol'] },
  { key: 'fittedWith', label: 'Fitted with', type: 'text', required: false, help: 'Model or program that gave the times', synonyms: ['fitted with', 'fit', 'model', 'software'] },
  { key: 'preparationNote', label: 'Preparation', type: 'text', required: false, help: 'How the tubes were made', synonyms: ['preparation', 'sample preparation'] },
]

/** Rate and its standard error of each row of a tube; the error of a time T ± s is s/T². */
export function ratesOf(tube: SeriesTube): { rate_per_s: number, se_per_s: number | null }[] {
  const isTime = tube.points.columns[0] === 't_s'
  return tube.points.rows.flatMap(([value, se]) => {
    if (value === null || value === undefined) return []
    return [isTime ? { rate_per_s: 1 / value, se_per_s: se == null ? null : se / value ** 2 } : { rate_per_s: value, se_per_s: se ?? null }]
  })
}

export function checkFittedTubes(tubes: readonly SeriesTube[], _conditions: Conditions): UploadProblem[] {
  return [...tubeSetProblems(tubes), ...tubes.flatMap(unlikelyTime)]
}

/** Seconds and milliseconds taken for each other make times that no tube of water has. */
function unlikelyTime(tube: SeriesTube): UploadProblem[] {
  const odd = ratesOf(tube).map(({ rate_per_s }) => 1 / rate_per_s).find(time => time > 30 || time < 1e-4)
  if (odd === undefined) return []
  return [asks('timeUnit', `Tube ${quoted(tube.label)} relaxes in ${Number(odd.toPrecision(4))} s.`, 'another unit, if it was taken wrongly; 0.1 ms to 30 s are usual', { field: `tubes.${tube.tubeNo}` })]
}

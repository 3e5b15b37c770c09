import type { Conditions, MeasurementKind, UploadProblem } from '../types'
import { asks, blocks } from './problem'
import type { RawTube } from './rawTube'
import type { SeriesPart, UnderstoodTube } from './understood'

interface Input { kind: MeasurementKind, series: readonly SeriesPart[], tubes: readonly UnderstoodTube[], conditions: Conditions, raw: readonly RawTube[] }

/** Problems of whole series: tubes without an agent, no blank, and what the kind itself has to say of them, set at the tube's place in the file. */
export function seriesProblems({ kind, series, tubes, conditions, raw }: Input): UploadProblem[] {
  if (tubes.length === 0) return []
  if (series.length === 0) return [blocks('noSample', 'No tube is a sample with a concentration.', 'at least three tubes with different concentrations, a blank among them')]
  const problems = series.flatMap(part => [...ownerProblems(part), ...blankProblems(part), ...kind.checkTubes(part.tubes, conditions).map(problem => placed(problem, part, raw))])
  return problems.filter((problem, i) => problems.findIndex(other => other.id === problem.id && other.row === problem.row && other.column === problem.column && other.message === problem.message) === i)
}

function ownerProblems({ complexCode, lot, tubes }: SeriesPart): UploadProblem[] {
  const names = tubes.filter(tube => tube.role === 'sample').map(tube => tube.tubeNo)
  const which = names.length > 6 ? `${names.length} tubes` : `tube${names.length > 1 ? 's' : ''} ${names.join(', ')}`
  if (complexCode === null) return [blocks('noAgent', `Nothing says which agent is in ${which}.`, 'an agent of the registry chosen for all tubes or tube by tube', { field: 'complexCode' })]
  return lot === null ? [blocks('noBatch', `Nothing says which batch of ${complexCode} is in ${which}.`, 'a batch of the agent chosen for all tubes or tube by tube', { field: 'lot' })] : []
}

function blankProblems({ complexCode, tubes }: SeriesPart): UploadProblem[] {
  if (tubes.some(tube => tube.role === 'blank')) return []
  const whose = complexCode === null ? 'The series has' : `The series of ${complexCode} has`
  return [asks('noBlank', `${whose} no blank: the intercept then rests on the samples alone.`, 'a tube without agent in the same medium, or the series as it is')]
}

/** Gives a problem of one tube the cell of that tube. */
function placed(problem: UploadProblem, part: SeriesPart, raw: readonly RawTube[]): UploadProblem {
  const tubeNo = /^tubes\.(\d+)/.exec(problem.field ?? '')?.[1]
  const tube = part.tubes.find(candidate => String(candidate.tubeNo) === tubeNo)
  const source = raw.find(candidate => candidate.key === tube?.key)
  return source === undefined || problem.row !== null ? problem : { ...problem, row: source.row, column: source.column }
}

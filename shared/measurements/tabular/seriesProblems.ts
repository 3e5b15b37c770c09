import type { Conditions, MeasurementKind, UploadProblem } from '../types'
import { asks, blocks } from './problem'
import type { RawTube } from './rawTube'
import type { SeriesPart, UnderstoodTube } from './understood'

interface Input { kind: MeasurementKind, series: readonly SeriesPart[], tubes: readonly UnderstoodTube[], conditions: Conditions, raw: readonly RawTube[] }

/** Problems of whole series: tubes without an agent, no blank, and what the kind itself has to say of them, set at the tube's place in the file. */
export function seriesProblems({ kind, series, tubes, conditions, raw }: Input): UploadProblem[] {
  if (tubes.length === 0) return []
  if (series.length === 0) return [blocks('noSample', 'No tube is a sample with a concentration.', kind.labelsName === 'course' ? 'at least one tube with complex in it' : 'at least three tubes with different concentrations, a blank among them')]
  return series.flatMap((part) => {
    const samples = tubes.filter(tube => tube.role === 'sample' && tube.agent === part.complexCode && tube.batch === part.lot)
    const owner = ownerProblems(part, samples.map(tube => tube.tubeNo))
    // A concentration still open blocks by itself; what a series lacks can be said only when its tubes are complete.
    if (samples.some(tube => tube.conc_mM === null)) return owner
    return [...owner, ...(kind.labelsName === 'course' ? [] : blankProblems(part)), ...kind.checkTubes(part.tubes, conditions).map(problem => placed(problem, part, raw))]
  })
}

function ownerProblems({ complexCode, lot }: SeriesPart, names: readonly number[]): UploadProblem[] {
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

import { checkExclusions } from '../relaxation/exclusions'
import { asks, blocks, quoted } from '../tabular/problem'
import { COURSE_TEMPLATES } from '../templates/course'
import { defineMeasurement, type AnalysisInput, type Conditions, type SeriesTube, type UploadProblem } from '../types'
import { COURSE_COLUMNS } from './columns'
import { COURSE_CONDITIONS, describeSolution } from './conditions'
import { endsOf, fitCourses, timePoints } from './courseTubes'
import { courseFigure, lawFigure } from './figures'
import { flaskOf, flaskProblems, isStrongAcid } from './flask'
import { LAW_MODELS, lawEvidence, lawOutcome } from './lawOutcome'
import type { LawDone } from './lawSeries'
import { lawText, leftOutText } from './methodText'
import { courseRates } from './seriesRates'

/** Dissociation followed in time: a flask per acid, metal and temperature; gives rates, and from three conditions their law. */
export const kineticsCourse = defineMeasurement({
  kind: 'kinetics.course',
  version: 1,
  title: 'Dissociation, time courses',
  purpose: 'A signal against time for each flask of acid, metal and temperature; gives a rate for each and their rate law, or the half-life in one acid.',
  columns: COURSE_COLUMNS,
  labelsName: 'course',
  concFrom: 'complexConc_mM',
  seriesWords: { title: 'Rate law', note: 'from the rates of all flasks' },
  conditions: COURSE_CONDITIONS,
  layouts: ['columnPerTube', 'long'],
  templates: COURSE_TEMPLATES,
  models: LAW_MODELS,
  defaultModel: () => 'rateLawSum',
  checkTubes: checkCourses,
  analyse(input) {
    checkExclusions(input.tubes, input.exclusions)
    const tubes = fitCourses(input)
    return lawOutcome({ input, tubes, rates: courseRates(input, tubes), flags: [], method: done => methodOf(input, done) })
  },
  evidence: lawEvidence,
  describe: conditions => describeSolution('dissociation', conditions),
  seriesFigure: outcome => lawFigure(outcome),
  tubeFigure: tube => courseFigure(tube, { label: 'Signal', unit: null }),
})

function checkCourses(tubes: readonly SeriesTube[], conditions: Conditions): UploadProblem[] {
  // a flask without points says nothing of itself yet
  const samples = tubes.filter(tube => tube.role === 'sample' && tube.points.rows.length > 0)
  const strong = samples.length > 0 && samples.every(tube => isStrongAcid(flaskOf(tube, conditions)))
  const one = new Set(samples.map(tube => JSON.stringify({ ...flaskOf(tube, conditions), temperature_K: null, isNamed: null }))).size === 1
  const acidOpen = strong && one && (conditions.acidKind ?? null) === null ? [asks('acidNotNamed', 'Nothing says which acid the flasks hold; half-lives compare in one acid only.', 'the acid chosen', { field: 'conditions.acidKind' })] : []
  return [...samples.flatMap(tube => [...flaskProblems(tube, conditions, { mayVary: false, needsAcid: true }), ...courseProblems(tube, conditions)]), ...acidOpen]
}

/** Too few times, one signal throughout, an end that is the start. */
function courseProblems(tube: SeriesTube, conditions: Conditions): UploadProblem[] {
  const points = timePoints(tube)
  const { end, start } = endsOf(tube, conditions)
  const at = { field: `tubes.${tube.tubeNo}` }
  const name = `Flask ${quoted(tube.label)}`
  const needed = end === null ? 5 : 4
  const times = new Set(points.map(point => point.time_s)).size
  const problems: UploadProblem[] = []
  if (points.length > 1 && points.every(point => point.signal === points[0]!.signal)) problems.push(blocks('constantSignal', `${name} has the same signal ${points[0]!.signal} at every time: it does not decay.`, 'a course that moves, or the flask put aside', at))
  else if (times < needed) problems.push(asks('fewPoints', `${name} has ${times} different times; a rate needs ${needed}${end === null ? ', or 4 with a known end value' : ''}.`, 'more times, an end value, or the flask put aside', at))
  if (start !== null && start === end) problems.push(blocks('noSpan', `${name}: start and end are the same signal, ${start}.`, 'a start that differs from the end', at))
  return problems
}

function methodOf(input: AnalysisInput, done: LawDone): string {
  const { signal, nuclideHalfLife_s } = input.conditions
  const spec = COURSE_CONDITIONS.find(one => one.key === 'signal')?.choices?.find(choice => choice.value === signal)
  const decay = typeof nuclideHalfLife_s === 'number' ? ' Counts were referred to time zero by the half-life of the nuclide.' : ''
  return `Dissociation was followed by ${spec?.label ?? 'a signal'}; each course was fitted with one exponential, y = y∞ + (y0 − y∞)·exp(−kt), by least squares over ln k.${decay}${lawText(input, done)}${leftOutText(input)}`
}

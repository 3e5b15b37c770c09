import { draftOf } from '../../evidence/records/common'
import { zincPhosphate as zincRecord } from '../../evidence/records/zincPhosphate'
import type { EvidenceDraft } from '../../evidence/types'
import type { NamedQuantity } from '../../evidence/quantity'
import { formatDuration } from '../../format'
import { ZINC_END_h, ZINC_RATIO } from '../../science/kinetics/zincPhosphate'
import type { FigureSpec } from '../../schemas/figure'
import { checkExclusions } from '../relaxation/exclusions'
import { leftOutText } from '../relaxation/methodText'
import { asks, quoted } from '../tabular/problem'
import { ZINC_TEMPLATES } from '../templates/zinc'
import { defineMeasurement, type AnalysisInput, type AnalysisOutcome, type Conditions, type Flag, type SeriesTube, type UploadProblem } from '../types'
import { courseFigure } from './figures'
import { protocolFlags, ZINC_COLUMNS, ZINC_CONDITIONS } from './zincForm'
import { ratioQuantity, readZincTube, timeQuantity, zincPoints, type ZincTube } from './zincTubes'

const CURVE_MODEL = { id: 'ratioBetweenPoints', version: 1, title: 'Read between measured points' }

/**
 * Transmetallation by zinc in phosphate: R1p(t)/R1p(0) of one run or of several.
 * @source S. Laurent, L. Vander Elst, F. Copoix, R. N. Muller, Invest. Radiol. 36, 115 (2001)
 */
export const kineticsZincPhosphate = defineMeasurement({
  kind: 'kinetics.zincPhosphate',
  version: 1,
  title: 'Zinc and phosphate',
  purpose: 'R1 against time after mixing with zinc in phosphate buffer; gives the share of R1p left at 72 h and the time to 0.80.',
  columns: ZINC_COLUMNS,
  labelsName: 'course',
  concFrom: 'complexConc_mM',
  seriesWords: { title: 'Zinc and phosphate', note: 'read between measured points, never beyond them' },
  conditions: ZINC_CONDITIONS,
  layouts: ['columnPerTube', 'long'],
  templates: ZINC_TEMPLATES,
  models: [CURVE_MODEL],
  defaultModel: () => CURVE_MODEL.id,
  checkTubes: checkRuns,
  analyse(input) {
    checkExclusions(input.tubes, input.exclusions)
    return outcomeOf(input, input.tubes.map(tube => readZincTube(tube, input)))
  },
  evidence: evidenceOf,
  describe: conditions => `zinc and phosphate, ${zincRecord.describe(conditions)}`,
  seriesFigure: () => null,
  tubeFigure: tube => withLimits(courseFigure(tube, { label: tube.refusal === null ? 'R_{1p}(t)/R_{1p}(0)' : 'R_1', unit: tube.refusal === null ? null : 's^-1' }, 'Joined between points; nothing is fitted.'), tube.refusal === null),
})

function withLimits(figure: FigureSpec, isRatio: boolean): FigureSpec {
  if (!isRatio) return figure
  const end = ({ h: ZINC_END_h, d: ZINC_END_h / 24, min: ZINC_END_h * 60, s: ZINC_END_h * 3600 } as Record<string, number>)[figure.x.unit ?? '']
  return {
    ...figure, y: { ...figure.y, domain: [0, 1.1] },
    layers: [...figure.layers, { type: 'rule', name: '0.80', axis: 'y', at: ZINC_RATIO, dash: 'dashed' }, ...(end === undefined ? [] : [{ type: 'rule' as const, name: '72 h', axis: 'x' as const, at: end, dash: 'dotted' as const }])],
  }
}

function checkRuns(tubes: readonly SeriesTube[], conditions: Conditions): UploadProblem[] {
  return tubes.filter(tube => tube.role === 'sample' && tube.points.rows.length > 0).flatMap((tube) => {
    const at = { field: `tubes.${tube.tubeNo}` }
    const times = zincPoints(tube, conditions).map(point => point.time_h)
    return [
      ...(Math.min(...times) === 0 ? [] : [asks('noStart', `Run ${quoted(tube.label)} has no point at 0 h: there is nothing to set the ratio against.`, 'a point at mixing, time 0', at)]),
      ...(Math.max(...times) >= ZINC_END_h ? [] : [asks('shortCourse', `Run ${quoted(tube.label)} ends at ${formatDuration(Math.max(...times) * 3600)}: it gives no ratio at 72 h.`, 'a course of 72 h or longer, or as it is for the time to 0.80', at)]),
      ...(typeof conditions.complexConc_mM === 'number' && Math.abs(tube.conc_mM / conditions.complexConc_mM - 1) > 0.02 ? [asks('otherComplex', `Run ${quoted(tube.label)} has ${tube.conc_mM} mM complex, the conditions say ${conditions.complexConc_mM} mM.`, 'one concentration for the runs of a series', at)] : []),
    ]
  })
}

function outcomeOf(input: AnalysisInput, runs: readonly ZincTube[]): AnalysisOutcome {
  const tubes = runs.map(run => run.result)
  const counted = tubes.filter(tube => tube.excluded === null && tube.headline !== null)
  if (counted.length === 0) {
    const why = tubes.find(tube => tube.excluded === null && tube.refusal !== null)?.refusal ?? { reason: 'noRun', message: 'No run is left.', accepted: 'one run or more that is not left out' }
    return { ok: false, ...why, tubes }
  }
  const ratios = counted.flatMap(tube => tube.parameters.filter(one => one.name === 'zincPhosphateRatio'))
  const times = counted.flatMap(tube => tube.parameters.filter(one => one.name === 'zincPhosphateTime080_s'))
  const ratio = ratios.length === 0 ? null : ratioQuantity(meanOf(ratios))
  const time = timeOf(times)
  const headline = ratio ?? time
  return {
    ok: true, tubes, passed: [], flags: [...flagsOf(ratio), ...protocolFlags(input.conditions)],
    series: {
      headline, parameters: ratio === null ? [time] : [ratio, time], line: [], band: [],
      points: counted.map((tube, i) => ({ tubeNo: tube.tubeNo, label: tube.label, x: i + 1, y: tube.headline!.value, ySe: tube.headline!.se, fitted: headline.value, studentised: null, cook: null, leaveOneOut: null, excluded: null })),
      statistics: [
        { label: 'Ratio at 72 h', value: ratio?.value ?? null, text: ratio === null ? 'not reached: the course ends before 72 h' : `${ratio.value.toFixed(3)}${ratio.se === null ? '' : ` ± ${ratio.se.toPrecision(2)}`}` },
        { label: 'Time to 0.80', value: time.value, text: time.kind === '>' ? `not reached within ${formatDuration(time.value)}` : formatDuration(time.value) }, { label: 'Runs', value: counted.length, text: String(counted.length) },
      ],
    },
    method: methodOf(input, counted.length),
  }
}

/** Mean of runs with the error of their scatter; of one run its own. */
function meanOf(ratios: readonly NamedQuantity[]): { value: number, se: number | null } {
  const value = ratios.reduce((sum, one) => sum + one.value, 0) / ratios.length
  if (ratios.length === 1) return { value, se: ratios[0]!.se }
  const scatter = Math.sqrt(ratios.reduce((sum, one) => sum + (one.value - value) ** 2, 0) / (ratios.length - 1) / ratios.length)
  const own = ratios.every(one => one.se !== null) ? Math.sqrt(ratios.reduce((sum, one) => sum + one.se! ** 2, 0)) / ratios.length : 0
  const se = Math.max(scatter, own)
  return { value, se: se > 0 ? se : null }
}

/** The mean where every run got there; one that did not makes the time "at least" the shortest that was watched or needed. */
function timeOf(times: readonly NamedQuantity[]): NamedQuantity {
  if (times.some(one => one.kind === '>')) return timeQuantity(Math.min(...times.map(one => one.value)), '>')
  const value = times.reduce((sum, one) => sum + one.value, 0) / times.length
  const scatter = times.length < 2 ? 0 : Math.sqrt(times.reduce((sum, one) => sum + (one.value - value) ** 2, 0) / (times.length - 1) / times.length)
  return { ...timeQuantity(value, '='), se: scatter > 0 ? scatter : null }
}

function flagsOf(ratio: NamedQuantity | null): Flag[] {
  return ratio === null ? [{ id: 'shortCourse', title: 'No ratio at 72 h', sentence: 'The course ends before 72 h, and a ratio is never extrapolated. Follow it to 72 h.', tubeNo: null }] : []
}

function evidenceOf(outcome: Extract<AnalysisOutcome, { ok: true }>, { conditions }: AnalysisInput): EvidenceDraft[] {
  const kept = Object.fromEntries(['b0_T', 'rate1Dia_per_s', 'zinc_mM', 'phosphate_mM', 'pH', 'temperature_K', 'temperatureSd_K', 'buffer'].flatMap(key => (conditions[key] ?? null) === null ? [] : [[key, conditions[key]!]]))
  const base = { ...kept, complex_mM: conditions.complexConc_mM ?? null }
  const isAnalogue = conditions.measuredOn === 'analogue'
  const nRuns = outcome.series.points.length
  return outcome.series.parameters.map(({ name, value, kind, se }) => draftOf({
    quantity: name, stored: { value, kind, se }, conditions: base, isPositive: name === 'zincPhosphateTime080_s', detail: { isAnalogue, nRuns, ...(name === 'zincPhosphateRatio' ? { at_s: ZINC_END_h * 3600 } : {}) },
  }))
}

function methodOf(input: AnalysisInput, runs: number): string {
  const number = (key: string): string => String(Number(Number(input.conditions[key]).toPrecision(4)))
  return `Transmetallation was followed by R1 in ${runs} ${runs === 1 ? 'run' : 'runs'} of ${number('complexConc_mM')} mM complex with ${number('zinc_mM')} mM zinc in ${number('phosphate_mM')} mM phosphate, pH ${number('pH')}, `
    + `${(Number(input.conditions.temperature_K) - 273.15).toFixed(1)} °C (Laurent et al. 2001); R1p is R1 less ${number('rate1Dia_per_s')} s^-1 of the buffer. Ratio at 72 h and time to 0.80 are read between measured points.${leftOutText(input)}`
}

import type { NamedQuantity } from '../../evidence/quantity'
import { halfLifeOf } from '../../science/kinetics/firstOrder'
import { inverseVarianceMean } from '../../science/statistics'
import { checkExclusions, leftOutOf } from '../relaxation/exclusions'
import { tubeFigureOf } from '../relaxation/figures'
import { asks, quoted } from '../tabular/problem'
import { columnOf } from '../relaxation/noise'
import { RATES_TEMPLATES } from '../templates/rates'
import { defineMeasurement, type AnalysisInput, type SeriesTube, type TubeResult, type UploadProblem } from '../types'
import { RATE_COLUMNS } from './columns'
import { describeSolution, RATE_TABLE_CONDITIONS } from './conditions'
import { given, namedHalfLife } from './courseTubes'
import { lawFigure } from './figures'
import { flaskOf, flaskPH, flaskProblems } from './flask'
import { LAW_MODELS, lawEvidence, lawOutcome } from './lawOutcome'
import { lawText, leftOutText } from './methodText'
import { seriesRate, type SeriesRate } from './seriesRates'

/** Rates fitted elsewhere against acid, metal and temperature: the same law as of time courses. */
export const kineticsRates = defineMeasurement({
  kind: 'kinetics.rates',
  version: 1,
  title: 'Dissociation, rates fitted elsewhere',
  purpose: 'A table of observed rates, with or without errors, against acid or pH, metal and temperature; gives the rate law or the half-life in one acid.',
  columns: RATE_COLUMNS,
  labelsName: 'course',
  concFrom: 'complexConc_mM',
  seriesWords: { title: 'Rate law', note: 'from the rates as given' },
  conditions: RATE_TABLE_CONDITIONS,
  layouts: ['long', 'columnPerTube'],
  templates: RATES_TEMPLATES,
  models: LAW_MODELS,
  defaultModel: () => 'rateLawSum',
  checkTubes: (tubes, conditions) => tubes.filter(tube => tube.role === 'sample' && tube.points.rows.length > 0).flatMap(tube => [...flaskProblems(tube, conditions, { mayVary: true, needsAcid: true }), ...unlikelyRates(tube)]),
  analyse(input) {
    checkExclusions(input.tubes, input.exclusions)
    const tubes = input.tubes.map(tube => readRates(tube, input))
    return lawOutcome({ input, tubes, rates: tableRates(input), flags: [], method: done => `Rates were given as fitted elsewhere${typeof input.conditions.fittedWith === 'string' ? ` (${input.conditions.fittedWith})` : ''}.${lawText(input, done)}${leftOutText(input)}` })
  },
  evidence: lawEvidence,
  describe: conditions => describeSolution('dissociation', conditions),
  seriesFigure: outcome => lawFigure(outcome),
  tubeFigure: tube => tubeFigureOf(tube, { token: 's1', tube: { x: { label: 'Row', unit: null }, y: { label: 'k_{obs}', unit: 's^-1' } }, rate: { label: '', unit: '' }, caption: '' }),
})

/** Every row with a rate is a point of the law, whatever flask it belongs to. */
function tableRates({ tubes, conditions, exclusions }: AnalysisInput): SeriesRate[] {
  return tubes.filter(tube => tube.role === 'sample').flatMap((tube) => {
    const left = leftOutOf(tube, exclusions)
    return rowsOf(tube).flatMap(({ rate_per_s, se_per_s }, row) => seriesRate({ tubeNo: tube.tubeNo, label: tube.label, flask: flaskOf(tube, conditions, row), rate_per_s, se_per_s, excluded: left.tube ?? left.points.get(row) ?? null }))
  })
}

function rowsOf(tube: SeriesTube): { rate_per_s: number, se_per_s: number | null }[] {
  const errors = columnOf(tube, 'rateSe_per_s')
  return (columnOf(tube, 'rate_per_s') ?? []).map((rate, i) => ({ rate_per_s: rate ?? NaN, se_per_s: errors?.[i] ?? null }))
}

/** A row by itself; the weighted mean where a flask has several rows of one condition. */
function readRates(tube: SeriesTube, { exclusions, conditions }: AnalysisInput): TubeResult {
  const left = leftOutOf(tube, exclusions)
  const rows = rowsOf(tube)
  const used = rows.map((_, row) => row).filter(row => !left.points.has(row))
  const flasks = new Set(used.map(row => JSON.stringify(flaskOf(tube, conditions, row))))
  const headline = flasks.size === 1 ? meanRate(used.map(row => rows[row]!)) : null
  const pH = used.length === 0 ? null : flaskPH(flaskOf(tube, conditions, used[0]!))
  return {
    tubeNo: tube.tubeNo, label: tube.label, role: tube.role, conc_mM: tube.conc_mM, excluded: left.tube, curve: [], flags: [], passed: [], statistics: null, secondOpinion: null,
    headline, parameters: headline === null ? [] : [headline, namedHalfLife(halfLifeOf(headline)), ...(pH === null ? [] : [given('pH', 'pH', '', pH)])],
    refusal: used.length === 0 ? { reason: 'tooFewPoints', message: 'No rate of this flask is left.', accepted: 'At least one rate.' } : null,
    points: rows.map(({ rate_per_s }, index) => ({ index, x: index + 1, y: rate_per_s, fitted: headline?.value ?? null, residual: headline === null ? null : rate_per_s - headline.value, studentised: null, excluded: left.points.get(index) ?? null })),
  }
}

function meanRate(rows: readonly { rate_per_s: number, se_per_s: number | null }[]): NamedQuantity {
  const rates = rows.map(row => row.rate_per_s)
  const errors = rows.flatMap(row => row.se_per_s ?? [])
  const weighted = errors.length === rates.length ? inverseVarianceMean(rates, errors) : null
  const se = weighted === null ? null : weighted.se * Math.sqrt(Math.max(1, rates.length > 1 ? weighted.chi2 / (rates.length - 1) : 1))
  return { ...given('kObs_per_s', 'k_{obs}', 's^-1', weighted?.mean ?? rates.reduce((sum, rate) => sum + rate, 0) / rates.length), se }
}

/** Rates per second and per hour taken for each other make flasks that lose everything within the mixing, or nothing in a year. */
function unlikelyRates(tube: SeriesTube): UploadProblem[] {
  const odd = rowsOf(tube).find(({ rate_per_s }) => rate_per_s > 1000 || rate_per_s < 1e-11)
  return odd === undefined ? [] : [asks('rateUnit', `Flask ${quoted(tube.label)} has a rate of ${Number(odd.rate_per_s.toPrecision(3))} s^-1.`, 'another unit, if it was taken wrongly; 1e-11 to 1000 s^-1 are usual', { field: `tubes.${tube.tubeNo}` })]
}

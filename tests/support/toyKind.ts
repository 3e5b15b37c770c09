import { defineMeasurement, type AnalysisInput, type AnalysisOutcome, type MeasurementKind, type SeriesTube, type TubeResult } from '../../shared/measurements/types'
import type { NamedQuantity } from '../../shared/evidence/quantity'

/**
 * A measurement that nobody makes: the mean of a few readings per tube, and a line through the means. It stands for any kind that may be added later;
 * nothing in upload, store, fit, check or export knows it.
 */
export const toyKind: MeasurementKind = defineMeasurement({
  kind: 'toy.glow',
  version: 3,
  title: 'Glow (toy)',
  purpose: 'Readings of a glow that does not exist.',
  columns: [
    { stem: 'tube', field: 'tube', label: 'tube', dimension: 'text', role: 'tube', synonyms: ['tube', 'vial'], required: true, help: '' },
    { stem: 'agent', field: 'agent', label: 'agent', dimension: 'text', role: 'agent', synonyms: ['agent'], required: false, help: '' },
    { stem: 'batch', field: 'batch', label: 'batch', dimension: 'text', role: 'batch', synonyms: ['batch', 'lot'], required: false, help: '' },
    { stem: 'conc', field: 'conc_mM', label: 'concentration', dimension: 'concentration', role: 'conc', synonyms: ['conc', 'concentration'], required: true, help: '' },
    { stem: 'dwell', field: 'dwell_s', label: 'dwell time', dimension: 'time', role: 'x', synonyms: ['dwell'], required: true, help: '', min: 0 },
    { stem: 'glow', field: 'glow_au', label: 'glow', dimension: 'signal', role: 'y', synonyms: ['glow'], required: true, help: '' },
  ],
  conditions: [
    { key: 'temperature_K', label: 'Temperature', type: 'number', dimension: 'temperature', shownUnit: '°C', required: true, min: 200, max: 400, help: '', synonyms: ['temperature'] },
    { key: 'lamp', label: 'Lamp', type: 'choice', required: false, choices: [{ value: 'red', label: 'red lamp' }, { value: 'blue', label: 'blue lamp' }], help: '', synonyms: ['lamp'] },
  ],
  layouts: ['long'],
  templates: [{ fileName: 'glow.csv', text: 'tube,agent,batch,conc (mM),dwell (s),glow\n' }],
  models: [{ id: 'toy.mean', version: 2, title: 'Mean', within: ['toy.drift'] }, { id: 'toy.drift', version: 1, title: 'Mean and drift' }],
  defaultModel: () => 'toy.mean',
  options: [{ key: 'note', label: 'Note', type: 'choice', standard: 'plain', help: 'Changes nothing', choices: [{ value: 'plain', label: 'plain' }, { value: 'kept', label: 'kept' }] }],
  checkTubes: tubes => tubes.length < 3 ? [{ id: 'toyFew', row: null, column: null, field: null, message: 'Fewer than three tubes.', accepted: 'three tubes', severity: 'blocks' }] : [],
  analyse,
  evidence: (outcome, input) => [{
    quantity: 'glow_per_mM', value: { value: outcome.series.headline.value, kind: '=', se: outcome.series.headline.se, interval: null, unit: 'mM^-1' },
    conditions: { temperature_K: input.conditions.temperature_K ?? null }, covarianceGroup: null, detail: { tubes: input.tubes.length },
  }],
  describe: conditions => `glow, ${Math.round(Number(conditions.temperature_K) - 273.15)} °C`,
  seriesFigure: outcome => outcome.ok
    ? { id: 'series', title: 'Glow', text: 'Glow against concentration.', x: { label: 'concentration', unit: 'mM', scale: 'linear' }, y: { label: 'glow', unit: null, scale: 'linear' }, layers: [] }
    : null,
  tubeFigure: tube => ({
    id: `tube-${tube.tubeNo}`, title: tube.label, text: `${tube.points.length} readings.`, x: { label: 'dwell time', unit: 's', scale: 'linear' }, y: { label: 'glow', unit: null, scale: 'linear' },
    layers: [{ type: 'points', name: tube.label, token: 's1', points: tube.points.map(({ x, y }) => ({ x, y })) }],
  }),
})

const quantity = (name: string, value: number, se: number | null, unit: string): NamedQuantity => ({ name, label: name, value, kind: '=', se, interval: null, unit, evidenceId: null })

function analyse(input: AnalysisInput): AnalysisOutcome {
  const tubes = input.tubes.map(tube => tubeResult(tube, input))
  const used = tubes.filter(tube => tube.excluded === null && tube.headline !== null)
  if (used.length < 3) return { ok: false, reason: 'tooFewTubes', message: `${used.length} tubes are left.`, accepted: 'three tubes', tubes }
  const meanX = used.reduce((sum, tube) => sum + tube.conc_mM, 0) / used.length
  const meanY = used.reduce((sum, tube) => sum + tube.headline!.value, 0) / used.length
  const sxx = used.reduce((sum, tube) => sum + (tube.conc_mM - meanX) ** 2, 0)
  const slope = used.reduce((sum, tube) => sum + (tube.conc_mM - meanX) * (tube.headline!.value - meanY), 0) / sxx
  const rest = used.reduce((sum, tube) => sum + (tube.headline!.value - meanY - slope * (tube.conc_mM - meanX)) ** 2, 0)
  const se = Math.sqrt(rest / Math.max(1, used.length - 2) / sxx)
  return {
    ok: true, tubes, flags: [], passed: ['always'], method: 'A line through the mean glow of each tube.',
    series: {
      headline: quantity('glow_per_mM', slope, se, 'mM^-1'), parameters: [quantity('glow_per_mM', slope, se, 'mM^-1')], line: [], band: [], statistics: [],
      points: tubes.map(tube => ({ tubeNo: tube.tubeNo, label: tube.label, x: tube.conc_mM, y: tube.headline?.value ?? 0, ySe: null, fitted: meanY + slope * (tube.conc_mM - meanX), studentised: null, cook: null, leaveOneOut: null, excluded: tube.excluded })),
    },
  }
}

function tubeResult(tube: SeriesTube, { exclusions, modelId }: AnalysisInput): TubeResult {
  const out = (index: number | null) => exclusions.find(one => one.tubeNo === tube.tubeNo && one.pointIndex === index)?.reason ?? null
  const points = tube.points.rows.map(([x, y], index) => ({ index, x: x!, y: y!, fitted: null, residual: null, studentised: null, excluded: out(index) }))
  const used = points.filter(point => point.excluded === null)
  const parameters = modelId === 'toy.drift' ? 2 : 1
  const mean = used.reduce((sum, point) => sum + point.y, 0) / used.length
  const meanX = used.reduce((sum, point) => sum + point.x, 0) / used.length
  const sxx = used.reduce((sum, point) => sum + (point.x - meanX) ** 2, 0)
  const drift = parameters === 2 && sxx > 0 ? used.reduce((sum, point) => sum + (point.x - meanX) * (point.y - mean), 0) / sxx : 0
  const rss = used.reduce((sum, point) => sum + (point.y - mean - drift * (point.x - meanX)) ** 2, 0)
  const dof = used.length - parameters
  return {
    tubeNo: tube.tubeNo, label: tube.label, role: tube.role, conc_mM: tube.conc_mM, excluded: out(null), headline: used.length > 0 ? quantity('glow_au', mean, null, 'au') : null,
    parameters: [], refusal: null, points, curve: [], flags: [], passed: [], secondOpinion: null,
    statistics: { rss, dof, reducedChi2: null, aicc: used.length * Math.log(rss / used.length + 1e-9) + 2 * parameters, r2: null, condition: null, evaluations: 1, stop: 'closed form', sigma: 'estimated' },
  }
}

import type { EvidenceDraft } from '../../evidence/types'
import { CELSIUS_ZERO_K } from '../../science/constants'
import { evidenceConditions } from '../relaxation/conditions'
import { checkExclusions } from '../relaxation/exclusions'
import { optionOf } from '../fitOptions'
import { SPECTRUM_TEMPLATES } from '../templates/zspectrum'
import { defineMeasurement, type AnalysisInput, type AnalysisOutcome, type Conditions, type FitOptionSpec } from '../types'
import { DETECTION_ASSUMPTIONS } from '../../science/exchange/detection'
import { SPECTRUM_COLUMNS } from './columns'
import { SPECTRUM_CONDITIONS } from './conditions'
import { detectInTissue } from './detect'
import { rateFigure, spectrumFigure } from './figures'
import { METHOD_IDS, METHOD_TITLES, type MethodId } from './methods'
import type { ShiftChoice } from './processScan'
import { spectrumProblems } from './problems'
import { samplesOf, type Sample } from './samples'
import { numberOr } from './scans'
import { groupsOf, rateOf, seriesOf, type GroupRate, type RateGroup } from './series'
import { tubeResults } from './tubes'

const SHIFT: FitOptionSpec = {
  key: 'waterShift', label: 'Water shift', type: 'choice', standard: 'auto', help: 'How the position of water is found',
  choices: [{ value: 'auto', label: 'water scan where there is one, else the dip' }, { value: 'wassr', label: 'water scan, by maximum symmetry' }, { value: 'waterDip', label: 'dips of the spectra of each tube' }, { value: 'none', label: 'none: offsets count from water' }],
}
const POOLS: FitOptionSpec = { key: 'pools', label: 'Lorentzian pools', type: 'integer', min: 2, max: 6, standard: 2, help: 'Water and the pool of the agent, and as many more as the residuals ask for' }

/** Z-spectra: water after saturation at many offsets; gives asymmetry, pools and the exchange rate by every method that the spectra allow. */
export const exchangeZSpectrum = defineMeasurement({
  kind: 'exchange.zspectrum',
  version: 1,
  title: 'Z-spectra',
  purpose: 'Water signal over the offset of saturation, at one or many B1 and saturation times; gives asymmetry, pools and the exchange rate.',
  columns: SPECTRUM_COLUMNS,
  labelsName: 'course',
  concFrom: 'complexConc_mM',
  seriesWords: { title: 'Exchange rate', note: 'from the spectra of all tubes' },
  conditions: SPECTRUM_CONDITIONS,
  layouts: ['columnPerTube', 'long'],
  templates: SPECTRUM_TEMPLATES,
  models: METHOD_IDS.map(id => ({ id, version: 1, title: METHOD_TITLES[id] })),
  defaultModel: () => 'quespInverse',
  options: [SHIFT, POOLS],
  checkTubes: spectrumProblems,
  analyse: analyseSpectra,
  evidence: rateEvidence,
  describe: describeSpectra,
  seriesFigure: rateFigure,
  tubeFigure: spectrumFigure,
})

function ratesOf(input: AnalysisInput): { samples: Sample[], groups: RateGroup[], chosen: { group: RateGroup, rate: GroupRate }[] } {
  const samples = samplesOf(input, optionOf(input, SHIFT) as ShiftChoice)
  const groups = groupsOf(samples.filter(one => one.scans.length > 0), input)
  const chosen = groups.flatMap((group) => {
    const rate = rateOf(group, input.modelId as MethodId)
    return rate === null ? [] : [{ group, rate }]
  })
  const spectra = ({ rate }: typeof chosen[number]) => rate.done.reduce((sum, one) => sum + one.result.points.length, 0)
  return { samples, groups, chosen: [...chosen].sort((a, b) => spectra(b) - spectra(a)) }
}

function analyseSpectra(input: AnalysisInput): AnalysisOutcome {
  checkExclusions(input.tubes, input.exclusions)
  const { samples, groups, chosen } = ratesOf(input)
  const tubes = tubeResults(input, samples, optionOf(input, POOLS) as number)
  if (chosen.length > 0) {
    const { series, flags } = seriesOf(input, groups, chosen)
    const seen = detectInTissue(input, chosen[0]!.rate.k)
    const withSeen = seen === null
      ? series
      : { ...series, parameters: [...series.parameters, ...(seen.quantity ? [seen.quantity] : [])], statistics: [...series.statistics, { label: 'Concentration seen in tissue', value: seen.quantity?.value ?? null, text: `${seen.text} ${DETECTION_ASSUMPTIONS}` }] }
    return { ok: true, tubes, series: withSeen, flags: [...flags, ...seen?.flags ?? []], passed: [], method: methodText(input, samples) }
  }
  const refusal = groups.flatMap(group => group.methods[input.modelId as MethodId] ?? []).find(one => !one.ok)
  const unread = samples.flatMap(one => one.outcomes).find(one => !one.ok)
  const why = refusal && !refusal.ok ? refusal : unread && !unread.ok ? unread : null
  return {
    ok: false, reason: why?.reason ?? 'noSpectra', message: why === null ? 'No tube has a spectrum.' : `${METHOD_TITLES[input.modelId as MethodId]}: ${why.message}`,
    accepted: why?.accepted ?? 'spectra with B1, saturation time and S0', tubes,
  }
}

function methodText(input: AnalysisInput, samples: readonly Sample[]): string {
  const scans = samples.flatMap(one => one.scans)
  const shifts = [...new Set(scans.map(one => ({ wassr: 'from a scan of weak saturation by maximum symmetry', waterDip: 'from the dips of the spectra of each tube', none: 'not corrected' })[one.shift.method]))]
  const left = input.exclusions.filter(one => one.pointIndex !== null).length
  return `Signals were divided by S0, followed on a straight line between its readings. The position of water was ${shifts.length > 1 ? `found ${shifts.join(', or ')}` : shifts[0] === 'not corrected' ? 'not corrected' : `found ${shifts[0]}`}. `
    + `Spectra were read at ${numberOr(input.conditions.poolOffset_ppm)} ppm and opposite by monotone cubic interpolation. The exchange rate is that of ${METHOD_TITLES[input.modelId as MethodId]} over ${scans.length} spectra, with R2 of the pool ${numberOr(input.conditions.r2s_per_s) === null ? 'neglected' : `of ${numberOr(input.conditions.r2s_per_s)} s⁻¹`}.`
    + (left > 0 ? ` ${left} reading${left > 1 ? 's were' : ' was'} left out by hand.` : '')
}

/** The exchange rate at each pH and temperature, by the method chosen, and the concentration that is seen in tissue where the conditions ask for it. */
function rateEvidence({ series }: Extract<AnalysisOutcome, { ok: true }>, input: AnalysisInput): EvidenceDraft[] {
  const { chosen } = ratesOf(input)
  const seen = series.parameters.find(one => one.name === 'workingConcentration_mM')
  const head = chosen[0]?.group
  return [...rateDrafts(input, chosen), ...(seen && head ? [{
    quantity: seen.name, value: { value: seen.value, kind: seen.kind, se: seen.se, interval: seen.interval, unit: seen.unit }, covarianceGroup: null,
    conditions: { ...evidenceConditions(input.conditions), ...atOf(head) },
    detail: Object.fromEntries(['detectDrop_points', 'detectB1_uT', 'detectTsat_s', 'tissueRate1_per_s', 'tissueRate2_per_s', 'agentR1_per_mM_s', 'agentR2_per_mM_s'].map(key => [key, numberOr(input.conditions[key])])),
  }] : [])]
}

const atOf = ({ pH, temperature_K }: RateGroup): Conditions => ({ ...(pH === null ? {} : { pH }), ...(temperature_K === null ? {} : { temperature_K }) })

function rateDrafts(input: AnalysisInput, chosen: readonly { group: RateGroup, rate: GroupRate }[]): EvidenceDraft[] {
  return chosen.filter(({ group }) => group.pH !== null && group.temperature_K !== null).map(({ group, rate }) => {
    const { value, kind, se, interval, unit } = rate.k
    return {
      quantity: 'kex_per_s', value: { value, kind, se, interval, unit }, covarianceGroup: null,
      conditions: { ...evidenceConditions(input.conditions), pH: group.pH, temperature_K: group.temperature_K },
      detail: {
        method: METHOD_TITLES[rate.method], offset_ppm: numberOr(input.conditions.poolOffset_ppm), protons: numberOr(input.conditions.protons), nSpectra: rate.done.reduce((sum, one) => sum + one.result.points.length, 0), nSamples: rate.samples,
        b1Min_uT: Math.min(...group.samples.flatMap(one => one.scans.map(scan => scan.scan.b1_uT))), b1Max_uT: Math.max(...group.samples.flatMap(one => one.scans.map(scan => scan.scan.b1_uT))),
        flags: rate.done.flatMap(one => one.result.flags.map(flag => flag.title)).join('; '),
      },
    }
  })
}

/** 'Z-spectra, +50 ppm, 7 T, 25 °C'. */
function describeSpectra({ poolOffset_ppm, b0_T, temperature_K }: Conditions): string {
  return [
    'Z-spectra', typeof poolOffset_ppm === 'number' ? `${poolOffset_ppm > 0 ? '+' : ''}${poolOffset_ppm} ppm` : null, typeof b0_T === 'number' ? `${Number(b0_T.toFixed(2))} T` : null,
    typeof temperature_K === 'number' ? `${Number((temperature_K - CELSIUS_ZERO_K).toFixed(1))} °C` : null,
  ].filter(part => part !== null).join(', ')
}

import { SAMPLE_CONDITIONS } from '../relaxation/conditions'
import type { ConditionSpec } from '../types'

const kept = ['instrument', 'b0_T', 'temperature_K', 'temperatureSd_K', 'pH', 'pHScale', 'medium', 'mediumDetail', 'buffer', 'date', 'operator', 'concScaleError_frac']
const SHARED = SAMPLE_CONDITIONS.filter(spec => kept.includes(spec.key)).map(spec => spec.key === 'instrument' || spec.key === 'concScaleError_frac' ? { ...spec, required: false } : spec)

const number = (key: string, label: string, rest: Pick<ConditionSpec, 'help' | 'synonyms'> & Partial<ConditionSpec>): ConditionSpec => ({ key, label, type: 'number', required: false, ...rest })

/** What a spectrum needs beside its points: the pool it was measured for, the saturation where the table does not say it, and what is known of water and pool. */
export const SPECTRUM_CONDITIONS: readonly ConditionSpec[] = [
  ...SHARED,
  number('complexConc_mM', 'Agent, all tubes', { dimension: 'concentration', shownUnit: 'mM', min: 1e-6, max: 10_000, help: 'Concentration, where the table has none', synonyms: ['agent concentration', 'complex concentration', 'concentration of agent', 'concentration'] }),
  number('poolOffset_ppm', 'Offset of the pool', { dimension: 'shift', shownUnit: 'ppm', required: true, min: -800, max: 800, help: 'Of the exchanging protons from water, with its sign', synonyms: ['pool offset', 'cest offset', 'offset of the pool', 'pool shift', 'exchange offset'] }),
  number('poolWidth_ppm', 'Width of the pool', { dimension: 'shift', shownUnit: 'ppm', required: true, min: 0.01, max: 200, help: 'Full width at half depth, about, as the spectrum shows it', synonyms: ['pool width', 'width of the pool', 'cest width'] }),
  number('protons', 'Exchanging protons', { dimension: 'none', min: 1, max: 100, help: 'In one molecule, at that offset', synonyms: ['exchanging protons', 'protons', 'number of protons', 'protons per molecule'] }),
  number('b1_uT', 'B1, all spectra', { dimension: 'pulseField', shownUnit: 'µT', min: 1e-4, max: 1000, help: 'Where the table has none', synonyms: ['b1', 'saturation b1', 'saturation power', 'saturation amplitude'] }),
  number('tsat_s', 'Saturation time, all spectra', { dimension: 'time', shownUnit: 's', min: 1e-4, max: 600, help: 'Where the table has none', synonyms: ['saturation time', 'tsat', 'saturation duration', 'saturation length'] }),
  number('recovery_s', 'Recovery before saturation', { dimension: 'time', shownUnit: 's', min: 0, max: 600, help: 'From the last read-out to the saturation; left empty: complete, 5·T1 or more', synonyms: ['recovery time', 'recovery delay', 'relaxation delay', 'delay before saturation'] }),
  number('s0From_ppm', 'S0 from this offset on', { dimension: 'shift', shownUnit: 'ppm', min: 1, max: 1e5, help: 'Readings at least this far from water, on either side, are S0', synonyms: ['s0 offset', 'far offset', 's0 from', 'offset of s0', 'm0 offset'] }),
  number('wassrB1_uT', 'B1 of the water scan', { dimension: 'pulseField', shownUnit: 'µT', min: 1e-4, max: 5, help: 'Spectra at this B1 or less find the water shift and nothing else', synonyms: ['water scan b1', 'wassr b1', 'b1 of the water scan', 'shift scan b1'] }),
  number('b1Error_frac', 'B1, error', { dimension: 'fraction', shownUnit: '%', min: 0, max: 0.5, help: 'Standard error of the scale of B1, where the table has none: 5 % of B1 is about 5 % of k', synonyms: ['b1 error', 'b1 uncertainty', 'error of b1'] }),
  number('r1w_per_s', 'R1w, all tubes', { dimension: 'rate', shownUnit: 's^-1', min: 1e-3, max: 1e3, help: 'Longitudinal relaxation rate of water in the tubes', synonyms: ['r1w', 'r1 of water', 'water r1'] }),
  number('r1wSe_per_s', 'R1w, standard error', { dimension: 'rate', shownUnit: 's^-1', min: 0, max: 1e3, help: 'Of that rate', synonyms: ['r1w error', 'r1w se', 'r1w standard error'] }),
  number('r2s_per_s', 'R2 of the pool', { dimension: 'rate', shownUnit: 's^-1', min: 0, max: 1e5, help: 'Transverse relaxation rate of the bound protons; left empty it counts as 0, and is flagged', synonyms: ['r2s', 'r2 of the pool', 'pool r2', 'r2 bound'] }),
  number('detectDrop_points', 'Drop to be seen in tissue', { dimension: 'none', min: 0.01, max: 99, help: 'In points (hundredths) of S0; with the five below and the exchanging protons it gives the concentration that is seen', synonyms: ['detection drop', 'drop to be seen', 'detectable drop'] }),
  number('detectB1_uT', 'B1 in tissue', { dimension: 'pulseField', shownUnit: 'µT', min: 1e-3, max: 1000, help: 'Of the saturation that is meant for use', synonyms: ['b1 in tissue', 'detection b1'] }),
  number('detectTsat_s', 'Saturation time in tissue', { dimension: 'time', shownUnit: 's', min: 1e-3, max: 600, help: 'Of the saturation that is meant for use', synonyms: ['saturation time in tissue', 'detection saturation time'] }),
  number('tissueRate1_per_s', 'R1 of the tissue', { dimension: 'rate', shownUnit: 's^-1', min: 1e-3, max: 100, help: 'Water of the tissue without agent', synonyms: ['tissue r1', 'r1 of the tissue'] }),
  number('tissueRate2_per_s', 'R2 of the tissue', { dimension: 'rate', shownUnit: 's^-1', min: 1e-2, max: 1e4, help: 'Water of the tissue without agent', synonyms: ['tissue r2', 'r2 of the tissue'] }),
  number('agentR1_per_mM_s', 'r1 of the agent', { dimension: 'relaxivity', shownUnit: 'mM^-1 s^-1', min: 0, max: 1000, help: 'Its own longitudinal relaxivity at this field', synonyms: ['agent r1', 'r1 of the agent'] }),
  number('agentR2_per_mM_s', 'r2 of the agent', { dimension: 'relaxivity', shownUnit: 'mM^-1 s^-1', min: 0, max: 1000, help: 'Its own transverse relaxivity at this field', synonyms: ['agent r2', 'r2 of the agent'] }),
  number('mtRatio', 'Macromolecular pool, ratio', { dimension: 'fraction', shownUnit: '%', min: 0, max: 0.5, help: 'Its protons over those of water', synonyms: ['macromolecular ratio', 'mt ratio', 'macromolecular pool ratio'] }),
  number('mtExchange_per_s', 'Macromolecular pool, exchange', { dimension: 'rate', shownUnit: 's^-1', min: 0, max: 1e4, help: 'From the pool to water', synonyms: ['macromolecular exchange', 'mt exchange'] }),
  number('mtT2_s', 'Macromolecular pool, T2', { dimension: 'time', shownUnit: 'µs', min: 1e-7, max: 1, help: 'Its transverse relaxation time', synonyms: ['macromolecular t2', 'mt t2'] }),
  { key: 'methodNote', label: 'Method note', type: 'text', required: false, help: 'Shape of the saturation, read-out, what else matters', synonyms: ['method', 'note', 'method note', 'sequence'] },
]

import { CELSIUS_ZERO_K } from '../../science/constants'
import type { Conditions, ConditionSpec } from '../types'

/** Classes within which relaxivities may be compared. */
export const MEDIUM_CLASSES: Readonly<Record<string, string>> = {
  water: 'aqueous', buffer: 'aqueous', saline: 'aqueous', plasma: 'plasma', serum: 'plasma', blood: 'blood', albumin: 'protein', gel: 'gel', other: 'other',
}

/** What every relaxation measurement needs to be comparable; starred in methods, section 8, where required. */
export const SAMPLE_CONDITIONS: readonly ConditionSpec[] = [
  { key: 'instrument', label: 'Instrument', type: 'text', required: true, help: 'Name of the scanner or relaxometer', synonyms: ['scanner', 'spectrometer', 'relaxometer', 'magnet'] },
  {
    key: 'b0_T', label: 'Field', type: 'number', dimension: 'field', shownUnit: 'T', required: true, min: 0.0001, max: 30, help: 'Static field; a proton frequency in MHz is read as well',
    synonyms: ['field', 'b0', 'field strength', 'magnetic field', 'static field', 'proton frequency', 'larmor frequency', 'frequency'],
  },
  {
    key: 'temperature_K', label: 'Temperature', type: 'number', dimension: 'temperature', shownUnit: '°C', sdKey: 'temperatureSd_K', required: true, min: CELSIUS_ZERO_K - 10, max: CELSIUS_ZERO_K + 100,
    help: 'Measured temperature of the tubes', synonyms: ['temperature', 'temp', 'sample temperature', 't sample'],
  },
  { key: 'temperatureSd_K', label: 'Temperature, SD', type: 'number', shownUnit: 'K', dimension: 'none', required: false, min: 0, max: 20, help: 'Spread over the session', synonyms: ['temperature sd', 'sd of temperature', 'temperature error'] },
  {
    key: 'temperatureRead', label: 'Temperature read', type: 'choice', required: false, help: 'Where the temperature was read', synonyms: ['temperature read', 'where temperature', 'thermometer'],
    choices: [
      { value: 'tube', label: 'in a tube', synonyms: ['tube', 'sample', 'in the tube', 'in sample'] }, { value: 'bath', label: 'in the bath around the tubes', synonyms: ['bath', 'water bath'] },
      { value: 'bore', label: 'air in the bore', synonyms: ['bore', 'air'] }, { value: 'set', label: 'set value only', synonyms: ['set', 'set value', 'setpoint', 'nominal'] },
    ],
  },
  { key: 'pH', label: 'pH', type: 'number', required: true, min: -1, max: 15, help: 'Of the samples, at the temperature measured', synonyms: ['ph', 'ph value', 'sample ph'] },
  {
    key: 'pHScale', label: 'pH scale', type: 'choice', required: false, help: 'What the number stands for', synonyms: ['ph scale'],
    choices: [{ value: 'activity', label: 'activity (glass electrode, buffers)', synonyms: ['activity', 'nist', 'electrode'] }, { value: 'concentration', label: 'concentration (-log [H])', synonyms: ['concentration', 'p[h]'] }, { value: 'nominal', label: 'as labelled on the medium', synonyms: ['nominal', 'label'] }],
  },
  {
    key: 'medium', label: 'Medium', type: 'choice', wordsKey: 'mediumDetail', required: true, help: 'What the tubes are filled with', synonyms: ['medium', 'matrix', 'solvent', 'sample medium'],
    choices: [
      { value: 'water', label: 'water', synonyms: ['h2o', 'pure water', 'deionised water', 'distilled water'] }, { value: 'buffer', label: 'buffer', synonyms: ['hepes', 'pbs', 'tris', 'mes', 'phosphate buffer', 'hepes buffer'] },
      { value: 'saline', label: 'saline', synonyms: ['nacl', 'physiological saline', '0.9 % nacl'] }, { value: 'plasma', label: 'plasma', synonyms: ['human plasma', 'bovine plasma', 'blood plasma'] },
      { value: 'serum', label: 'serum', synonyms: ['human serum', 'bovine serum', 'blood serum'] }, { value: 'blood', label: 'whole blood', synonyms: ['blood', 'human blood', 'human whole blood'] },
      { value: 'albumin', label: 'albumin solution', synonyms: ['albumin', 'hsa', 'bsa', 'serum albumin'] }, { value: 'gel', label: 'gel', synonyms: ['agar', 'agarose', 'gelatine'] }, { value: 'other', label: 'another medium' },
    ],
  },
  { key: 'mediumDetail', label: 'Medium in words', type: 'text', required: false, help: 'Species, supplier lot, protein content', synonyms: ['medium detail', 'medium note'] },
  { key: 'protein_mM', label: 'Protein in the medium', type: 'number', dimension: 'concentration', shownUnit: 'mM', required: false, min: 1e-6, max: 100, help: 'Needed for a binding isotherm; albumin of plasma is about 0.6 mM', synonyms: ['protein', 'protein concentration', 'albumin concentration', 'hsa concentration', '[hsa]'], when: { key: 'medium', is: ['plasma', 'serum', 'blood', 'albumin'] } },
  { key: 'buffer', label: 'Buffer', type: 'text', required: false, help: 'Name and concentration, such as 50 mM HEPES', synonyms: ['buffer'] },
  { key: 'date', label: 'Date', type: 'date', required: false, help: 'Day of the measurement', synonyms: ['date', 'measured on', 'day', 'acquisition date'] },
  { key: 'operator', label: 'Measured by', type: 'text', required: false, help: 'Who stood at the instrument', synonyms: ['operator', 'measured by', 'user'] },
  {
    key: 'aeration', label: 'Oxygen', type: 'choice', required: false, help: 'Dissolved oxygen relaxes water by about 0.08 s^-1', synonyms: ['aeration', 'oxygen', 'gas'],
    choices: [{ value: 'airSaturated', label: 'air-saturated', synonyms: ['air', 'aerated', 'air saturated'] }, { value: 'degassed', label: 'degassed', synonyms: ['deoxygenated', 'argon', 'nitrogen'] }],
  },
  {
    key: 'concBasis', label: 'Concentration from', type: 'choice', required: true, help: 'How the metal in the stock was determined', synonyms: ['concentration basis', 'concentration from', 'conc basis', 'assay'],
    choices: [{ value: 'nominal', label: 'weighing (nominal)', synonyms: ['nominal', 'weighing', 'gravimetric'] }, { value: 'icp', label: 'ICP of the stock', synonyms: ['icp', 'icp oes', 'icp ms', 'icp aes'] }, { value: 'susceptibility', label: 'susceptibility shift', synonyms: ['bms', 'bulk magnetic susceptibility', 'susceptibility', 'evans'] }],
  },
  {
    key: 'concScaleError_frac', label: 'Concentration, common error', type: 'number', dimension: 'fraction', shownUnit: '%', required: true, min: 0, max: 0.5,
    help: 'Standard error of the stock assay: common to all tubes, so it goes into the relaxivity and not into the line', synonyms: ['scale error', 'stock error', 'concentration scale error', 'common concentration error', 'assay error'],
  },
  { key: 'stock', label: 'Stock solution', type: 'text', required: false, help: 'Series from one stock share its error', synonyms: ['stock', 'stock solution', 'stock id'] },
  { key: 'preparations', label: 'Preparations', type: 'number', dimension: 'none', required: false, min: 1, max: 1000, help: 'Independent dilution series behind these tubes', synonyms: ['preparations', 'n preparations', 'independent preparations'] },
]

/** What evidence of this measurement carries: the conditions that comparisons read, in stored units; what was not given is absent. */
export function evidenceConditions(conditions: Conditions): Conditions {
  const keys = ['b0_T', 'temperature_K', 'temperatureSd_K', 'pH', 'pHScale', 'medium', 'mediumDetail', 'buffer', 'aeration', 'concBasis', 'echoSpacing_s']
  const kept = keys.flatMap((key) => { const value = conditions[key] ?? null; return value === null ? [] : [[key, value] as const] })
  return { ...Object.fromEntries(kept), mediumClass: MEDIUM_CLASSES[String(conditions.medium ?? '')] ?? 'other' }
}

/** 'r_1, 3 T, 37 °C, plasma'. */
export function describeConditions(symbol: string, conditions: Conditions): string {
  const { b0_T, temperature_K, medium } = conditions
  return [
    symbol,
    typeof b0_T === 'number' ? `${plain(b0_T)} T` : null,
    typeof temperature_K === 'number' ? `${plain(temperature_K - CELSIUS_ZERO_K)} °C` : null,
    typeof medium === 'string' ? SAMPLE_CONDITIONS.find(spec => spec.key === 'medium')?.choices?.find(choice => choice.value === medium)?.label ?? medium : null,
  ].filter(part => part !== null).join(', ')
}

function plain(value: number): string {
  return String(Number(value.toFixed(2)))
}

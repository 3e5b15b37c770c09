import { formatCelsius, formatNumber, NBSP } from '../../format'
import { mediumField, mediumWords } from '../../evidence/records/common'
import type { Conditions, ConditionSpec } from '../types'

const MEDIUM_SYNONYMS: Readonly<Record<string, readonly string[]>> = {
  KCl: ['potassium chloride'], KNO3: ['potassium nitrate'], NaCl: ['sodium chloride', 'saline'], NaClO4: ['sodium perchlorate'], NMe4Cl: ['tmac', 'tmacl', '(ch3)4ncl', 'me4ncl'], NMe4NO3: ['tma nitrate'],
  NEt4ClO4: ['tea perchlorate'], water: ['none', 'no salt', 'water'], other: ['another'],
}

/** Solvent, salt and warmth, which every course and every rate needs to be comparable. */
export const SOLUTION_CONDITIONS: readonly ConditionSpec[] = [
  {
    key: 'temperature_K', label: 'Temperature', type: 'number', dimension: 'temperature', shownUnit: '°C', sdKey: 'temperatureSd_K', required: true, min: 250, max: 400,
    help: 'Of the flasks; where they differ, each has its own in the table', synonyms: ['temperature', 'temp', 'bath temperature', 'flask temperature'],
  },
  { key: 'temperatureSd_K', label: 'Temperature, SD', type: 'number', shownUnit: 'K', dimension: 'none', required: false, min: 0, max: 20, help: 'Spread over the course', synonyms: ['temperature sd', 'sd of temperature'] },
  {
    key: 'ionicStrength_mM', label: 'Ionic strength', type: 'number', dimension: 'concentration', shownUnit: 'M', required: true, min: 0, max: 6000, help: 'Kept by the electrolyte',
    synonyms: ['ionic strength', 'i'],
  },
  {
    key: 'medium', label: 'Electrolyte', type: 'choice', required: true, help: 'What keeps the ionic strength. Sodium binds some macrocyclic ligands', synonyms: ['electrolyte', 'background electrolyte', 'salt', 'medium', 'supporting electrolyte'],
    choices: mediumField.options.map(({ value, label }) => ({ value, label: label.replaceAll('_', ''), synonyms: MEDIUM_SYNONYMS[value] ?? [] })),
  },
]

/** What was put in, where it is the same for all flasks. */
export const FLASK_CONDITIONS: readonly ConditionSpec[] = [
  { key: 'acid_mM', label: 'Acid, all flasks', type: 'number', dimension: 'concentration', shownUnit: 'M', required: false, min: 0.001, max: 20_000, help: 'Strong acid, where the table has none', synonyms: ['acid', 'acid concentration', 'hcl', 'hclo4', 'h+', '[h+]'] },
  {
    key: 'acidKind', label: 'Which acid', type: 'choice', required: false, help: 'Half-lives compare in one acid only', synonyms: ['which acid', 'kind of acid', 'acid used', 'name of acid'],
    choices: [
      { value: 'HCl', label: 'hydrochloric acid', synonyms: ['hydrochloric'] }, { value: 'HClO4', label: 'perchloric acid', synonyms: ['perchloric'] },
      { value: 'HNO3', label: 'nitric acid', synonyms: ['nitric'] }, { value: 'other', label: 'another, named in the note', synonyms: ['other', 'buffer'] },
    ],
  },
  { key: 'pH', label: 'pH, all flasks', type: 'number', required: false, min: -1, max: 14, help: 'Where the table has neither acid nor pH', synonyms: ['ph', 'ph value'] },
  {
    key: 'pHScale', label: 'pH scale', type: 'choice', required: false, help: 'The law needs [H]; an electrode in activity reads about 0.1 apart at 0.15 M', synonyms: ['ph scale'],
    choices: [{ value: 'concentration', label: 'concentration (-log [H])', synonyms: ['concentration', 'p[h]'] }, { value: 'activity', label: 'activity (glass electrode, buffers)', synonyms: ['activity', 'nist', 'electrode'] }],
  },
]

export const METHOD_CONDITIONS: readonly ConditionSpec[] = [
  { key: 'instrument', label: 'Instrument', type: 'text', required: false, help: 'Name of the instrument', synonyms: ['instrument', 'spectrometer', 'relaxometer', 'scanner'] },
  { key: 'date', label: 'Date', type: 'date', required: false, help: 'Day on which the first course was started', synonyms: ['date', 'measured on', 'day', 'started'] },
  { key: 'operator', label: 'Measured by', type: 'text', required: false, help: 'Who measured', synonyms: ['operator', 'measured by', 'user'] },
  { key: 'methodNote', label: 'Method note', type: 'text', required: false, help: 'Buffer, wavelength, quenching, what else matters', synonyms: ['method', 'note', 'method note', 'remark'] },
]

export const COMPLEX_CONDITION: ConditionSpec = {
  key: 'complexConc_mM', label: 'Complex, all flasks', type: 'number', dimension: 'concentration', shownUnit: 'mM', required: false, min: 1e-6, max: 1000, help: 'Concentration of the complex, where the table has none',
  synonyms: ['complex', 'complex concentration', 'concentration of complex', 'concentration of the complex', 'c complex'],
}

const SIGNALS: ConditionSpec = {
  key: 'signal', label: 'Signal', type: 'choice', required: true, help: 'What was followed', synonyms: ['signal', 'followed by', 'observable', 'detection'],
  choices: [
    { value: 'relaxation', label: 'relaxation rate', synonyms: ['r1', 'r2', 'relaxation', 'relaxometry', '1/t1'] }, { value: 'absorbance', label: 'absorbance', synonyms: ['uv', 'uv vis', 'abs', 'spectrophotometry'] },
    { value: 'luminescence', label: 'luminescence', synonyms: ['fluorescence', 'emission'] }, { value: 'peakArea', label: 'peak area', synonyms: ['area', 'hplc', 'chromatography', 'integral', 'nmr integral', 'mass spectrum'] },
    { value: 'activity', label: 'activity of a nuclide', synonyms: ['activity', 'counts', 'radioactivity'] }, { value: 'other', label: 'another, named in the note' },
  ],
}

export const COURSE_CONDITIONS: readonly ConditionSpec[] = [
  SIGNALS, ...SOLUTION_CONDITIONS, ...FLASK_CONDITIONS, COMPLEX_CONDITION,
  { key: 'end_au', label: 'End value, all flasks', type: 'number', dimension: 'signal', shownUnit: 'au', required: false, help: 'Signal after complete reaction, where it is the same for all', synonyms: ['end value', 'end', 'end signal', 'final value', 'plateau'] },
  { key: 'start_au', label: 'Start value, all flasks', type: 'number', dimension: 'signal', shownUnit: 'au', required: false, help: 'Signal at time zero, where it is the same for all', synonyms: ['start value', 'start', 'start signal', 'initial value'] },
  {
    key: 'nuclideHalfLife_s', label: 'Half-life of the nuclide', type: 'number', dimension: 'time', shownUnit: 'h', required: false, min: 1, max: 1e10, when: { key: 'signal', is: ['activity'] },
    help: 'Counts are referred to time zero with it; left empty where they are corrected already', synonyms: ['nuclide half life', 'half life of the nuclide', 'physical half life', 'decay half life'],
  },
  ...METHOD_CONDITIONS,
]

export const RATE_TABLE_CONDITIONS: readonly ConditionSpec[] = [
  ...SOLUTION_CONDITIONS, ...FLASK_CONDITIONS, COMPLEX_CONDITION,
  { key: 'fittedWith', label: 'Fitted with', type: 'text', required: false, help: 'Model or program that gave the rates', synonyms: ['fitted with', 'fit', 'model', 'software'] }, ...METHOD_CONDITIONS,
]

/** 'dissociation, 25 °C, 0.1 M KCl'. */
export function describeSolution(what: string, { temperature_K, ionicStrength_mM, medium }: Conditions): string {
  const strength = typeof ionicStrength_mM === 'number' ? `${formatNumber(ionicStrength_mM / 1000)}${NBSP}M` : ''
  return [what, typeof temperature_K === 'number' ? formatCelsius(temperature_K, 0) : '', [strength, typeof medium === 'string' ? mediumWords(medium) : ''].filter(Boolean).join(' ')].filter(Boolean).join(', ')
}

/** Conditions that evidence of rates carries, in the names of the records: what was not given is absent. */
export function solutionEvidence({ ionicStrength_mM, medium, pHScale, temperatureSd_K, signal }: Conditions): Conditions {
  const given: Conditions = { medium: medium ?? null, pHScale: pHScale ?? null, temperatureSd_K: temperatureSd_K ?? null, signal: signal ?? null, ionicStrength_M: typeof ionicStrength_mM === 'number' ? ionicStrength_mM / 1000 : null }
  return Object.fromEntries(Object.entries(given).filter(([, value]) => value !== null))
}

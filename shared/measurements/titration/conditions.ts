import { formatCelsius, formatNumber, NBSP } from '../../format'
import { mediumWords } from '../../evidence/records/common'
import { LANTHANIDES, METALS } from '../../schemas/metal'
import { FLASK_CONDITIONS, METHOD_CONDITIONS, SOLUTION_CONDITIONS } from '../kinetics/conditions'
import type { Conditions, ConditionSpec } from '../types'

const HELP: Readonly<Record<string, string>> = { temperature_K: 'Of the thermostatted vessel', temperatureSd_K: 'Spread over the titrations', date: 'Day of the first titration', methodNote: 'Electrode, gas over the vessel, waiting time, what else matters' }
const inWordsOfTitration = (spec: ConditionSpec): ConditionSpec => ({ ...spec, help: HELP[spec.key] ?? spec.help })
const concentration = (key: string, label: string, help: string, synonyms: readonly string[], rest: Partial<ConditionSpec> = {}): ConditionSpec =>
  ({ key, label, type: 'number', dimension: 'concentration', shownUnit: 'mM', required: false, min: 0, max: 20_000, help, synonyms, ...rest })

const pHScale = FLASK_CONDITIONS.find(spec => spec.key === 'pHScale')!

/** A constant of the complex, typed: the start of its refinement, or the value at which it is held. */
const constant = (key: string, label: string, range: readonly [number, number], synonyms: readonly string[]): ConditionSpec =>
  ({ key, label, type: 'number', required: false, min: range[0], max: range[1], help: 'The start of a refinement, or the value at which it is held', synonyms })

export const TITRATION_CONDITIONS: readonly ConditionSpec[] = [
  {
    key: 'metal', label: 'Metal', type: 'choice', required: true, help: 'The metal of the agent', synonyms: ['metal', 'metal ion', 'lanthanide'],
    choices: METALS.map(value => ({ value, label: LANTHANIDES[value].name, synonyms: [`${value.toLowerCase()}(iii)`, `${value.toLowerCase()}3+`] })),
  },
  ...SOLUTION_CONDITIONS.map(inWordsOfTitration),
  { key: 'pKw', label: 'pKw of the medium', type: 'number', required: true, min: 11, max: 16, help: 'As −log [H][OH], such as 13.78 at 25 °C and 0.1 M; an electrode calibrated in base brings its own', synonyms: ['pkw', 'pk w', 'pkw of the medium', 'ion product of water'] },
  { ...pHScale, help: 'Constants need −log [H]; an electrode in activity reads about 0.1 apart at 0.1 M' },
  {
    key: 'ligandProtons', label: 'Acid protons of the ligand as weighed', type: 'number', required: true, min: -12, max: 12, help: 'Protons each ligand brings: 4 for H4L, 6 for H4L with two HCl, 0 for a neutral salt of L',
    synonyms: ['ligand protons', 'protons of the ligand', 'acid protons', 'protons per ligand', 'acid protons of the ligand', 'acid protons of the ligand as weighed'],
  },
  {
    key: 'protonation', label: 'Protonation constants of the ligand', type: 'text', required: false, help: 'Stepwise log K, most basic first, such as 9.5; 6.2; 2.7: the start of a refinement, or the values held',
    synonyms: ['protonation', 'protonation constants', 'log k of the ligand', 'ligand protonation', 'protonation constants of the ligand', 'stepwise log k'],
  },
  constant('logKML', 'log K of ML', [-2, 40], ['log k', 'logk', 'log k of ml', 'log k ml', 'stability constant']),
  constant('logKMHL', 'log K of ML + H', [-2, 12], ['log k of ml + h', 'log k mhl', 'protonation of the complex']),
  constant('logKMLOH', 'log K of ML = ML(OH) + H', [-18, 0], ['log k of ml(oh)', 'log k mloh', 'hydroxo complex']),
  {
    key: 'metalHydroxide', label: 'Hydroxides of the metal', type: 'text', required: false, help: 'log *β of M + j H2O = M(OH)j + j H, one hydroxide first, such as −8.0; held. Left empty, none is considered',
    synonyms: ['metal hydroxide', 'metal hydroxides', 'hydrolysis', 'hydroxides of the metal', 'hydrolysis of the metal'],
  },
  { key: 'vessel_L', label: 'In the vessel, all curves', type: 'number', dimension: 'volume', shownUnit: 'mL', required: false, min: 1e-6, max: 10, help: 'Volume before any base, where the table has none', synonyms: ['vessel', 'initial volume', 'v0', 'vessel volume', 'start volume', 'volume in the vessel'] },
  concentration('base_mM', 'Titrant, all curves', 'Strong base in the burette, where the table has none', ['base', 'titrant', 'strong base', 'titrant concentration', 'koh', 'naoh', 'base concentration'], { min: 1e-3 }),
  concentration('carbonate_mM', 'Carbonate in the titrant', 'Held in the refinement; left empty, none is considered', ['carbonate', 'carbonate in the titrant', 'carbonate in the base']),
  concentration('acid_mM', 'Strong acid, all curves', 'In the vessel before any base, where the table has none', ['acid', 'strong acid', 'acid concentration'], { min: -20_000 }),
  concentration('ligandConc_mM', 'Ligand, all curves', 'In the vessel before any base, where the table has none', ['ligand', 'ligand concentration', 'concentration of the ligand', 'total ligand']),
  { key: 'e0_mV', label: 'E° of the electrode', type: 'number', dimension: 'potential', shownUnit: 'mV', required: false, min: -2000, max: 2000, help: 'Only where no curve of strong acid calibrates it', synonyms: ['e0', 'e°', 'standard potential', 'e0 of the electrode'] },
  { key: 'slope_mV', label: 'Slope of the electrode', type: 'number', dimension: 'potential', shownUnit: 'mV', required: false, min: 40, max: 75, help: 'mV per decade of [H]; 59.16 by theory at 25 °C', synonyms: ['slope', 'electrode slope', 'slope of the electrode'] },
  ...METHOD_CONDITIONS.map(inWordsOfTitration),
]

/** 'log K of Gd by titration, 25 °C, 0.1 M KCl'. */
export function describeTitration({ metal, temperature_K, ionicStrength_mM, medium }: Conditions): string {
  const strength = typeof ionicStrength_mM === 'number' ? `${formatNumber(ionicStrength_mM / 1000)}${NBSP}M` : ''
  const solution = [strength, typeof medium === 'string' ? mediumWords(medium) : ''].filter(Boolean).join(' ')
  return [`titration${typeof metal === 'string' ? ` with ${metal}` : ''}`, typeof temperature_K === 'number' ? formatCelsius(temperature_K, 0) : '', solution].filter(Boolean).join(', ')
}

/** Conditions as a stability record keeps them. */
export function evidenceConditions({ metal, temperature_K, temperatureSd_K, ionicStrength_mM, medium, pHScale: scale }: Conditions): Conditions {
  const given: Conditions = {
    method: 'potentiometry', metal: metal ?? null, temperature_K: temperature_K ?? null, temperatureSd_K: temperatureSd_K ?? null, medium: medium ?? null, pHScale: scale ?? 'concentration',
    ionicStrength_M: typeof ionicStrength_mM === 'number' ? ionicStrength_mM / 1000 : null,
  }
  return Object.fromEntries(Object.entries(given).filter(([, value]) => value !== null))
}

/** Constants typed in one line: '9.5; 6.2; 2.7', by semicolons, spaces, or commas with a space; a comma inside a number is the decimal mark. Null for a text with anything else in it, [] for none. */
export function typedList(text: unknown): number[] | null {
  if (typeof text !== 'string' || text.trim() === '') return []
  const words = text.trim().split(/\s*;\s*|,\s+|\s+/).map(word => word.replace('\u2212', '-'))
  return words.every(word => /^[+-]?\d+(?:[.,]\d+)?$/.test(word)) ? words.map(word => Number(word.replace(',', '.'))) : null
}

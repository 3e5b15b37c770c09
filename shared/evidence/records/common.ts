import type { Conditions } from '../../measurements/types'
import { formatCelsius, formatNumber, NBSP, writeValue } from '../../format'
import { logInterval } from '../../science/kinetics/firstOrder'
import { evidenceQuantity } from '../quantities'
import type { EvidenceDraft } from '../types'
import type { ChoiceField, NumberField, TextField } from './define'
import type { StoredValue } from './values'

/** 97.5 % point of the normal distribution. */
const Z_95 = 1.959963984540054

/** Fields that several kinds ask in the same words. */
export const temperatureField: NumberField = {
  type: 'number', key: 'temperature_K', label: 'Temperature', required: true, group: 'Conditions', dimension: 'temperature', stored: 'K', units: ['°C', 'K'], min: 250, max: 400,
}
export const ionicStrengthField = (required: boolean): NumberField => ({
  type: 'number', key: 'ionicStrength_M', label: 'Ionic strength', required, group: 'Conditions', dimension: 'concentration', stored: 'M', units: ['M', 'mM'], min: 0, max: 6,
})
export const pHField: NumberField = {
  type: 'number', key: 'pH', label: 'pH', required: true, group: 'Conditions', dimension: null, stored: '', units: [''], min: -1, max: 14,
}

const MEDIA = [
  ['KCl', 'KCl'], ['KNO3', 'KNO_3'], ['NaCl', 'NaCl'], ['NaClO4', 'NaClO_4'], ['NMe4Cl', 'tetramethylammonium chloride'], ['NMe4NO3', 'tetramethylammonium nitrate'],
  ['NEt4ClO4', 'tetraethylammonium perchlorate'], ['water', 'water, nothing added'], ['other', 'another, named in the note'], ['notStated', 'not stated'],
] as const
export const mediumField: ChoiceField = {
  type: 'choice', key: 'medium', label: 'Electrolyte', required: true, group: 'Conditions', options: MEDIA.map(([value, label]) => ({ value, label })),
  help: 'Sodium binds some macrocyclic ligands: constants from sodium and from tetraalkylammonium media can differ by 1 to 3.',
}
export const noteField: TextField = { type: 'text', key: 'note', label: 'Note', required: false, group: 'Conditions', most: 1000 }

/** Short form of an electrolyte, notation. */
export function mediumWords(medium: string): string {
  if (medium === 'notStated') return 'electrolyte not stated'
  return MEDIA.some(([value]) => value === medium) ? medium.replace(/\d+/g, '_$&') : medium
}

/** Ionic strength and electrolyte: "0.1 M KCl", or of the two what is stated; '' without either. Notation. */
export function solutionWords(ionicStrength_M: unknown, medium: unknown): string {
  const words = typeof medium === 'string' ? mediumWords(medium) : ''
  if (typeof ionicStrength_M !== 'number') return words
  return `${formatNumber(ionicStrength_M)}${NBSP}M${medium === 'notStated' ? ',' : ''} ${words}`.trim()
}

/** Temperature, ionic strength and electrolyte as the trade writes them: "25 °C, 0.1 M KCl". */
export function describeMedium(conditions: Conditions): string {
  const { temperature_K, ionicStrength_M, medium } = conditions
  const parts: string[] = []
  if (typeof temperature_K === 'number') parts.push(formatCelsius(temperature_K, 0))
  const solution = solutionWords(ionicStrength_M, medium)
  return [...parts, ...(solution ? [solution] : [])].join(', ')
}

/** A value in words with its bound and error, notation. */
export function writeStored({ value, kind, se }: StoredValue, unit = ''): string {
  const written = writeValue(value, se)
  const error = written.plusMinus === null ? '' : ` ± ${written.plusMinus}`
  const body = written.power === null ? `${written.value}${error}` : `${error ? `(${written.value}${error})` : written.value}${NBSP}×${NBSP}10^{${written.power}}`
  const bound = kind === '<' ? 'less than ' : kind === '>' ? 'more than ' : ''
  return `${bound}${body}${unit ? `${NBSP}${unit}` : ''}`
}

/** 95 % interval: about the logarithm for what can only be positive (rates, times), about the value otherwise; none for a bound. */
export function intervalOf({ value, kind, se }: StoredValue, isPositive: boolean): [number, number] | null {
  if (kind !== '=' || se === null) return null
  return isPositive ? logInterval(value, se) : [value - Z_95 * se, value + Z_95 * se]
}

export interface DraftParts { quantity: string, stored: StoredValue, conditions: Conditions, isPositive?: boolean, detail?: EvidenceDraft['detail'], covarianceGroup?: EvidenceDraft['covarianceGroup'] }

/** One piece of evidence from a typed value, in the unit that its quantity is kept in. @throws Error for a quantity that is in no registry */
export function draftOf({ quantity, stored, conditions, isPositive = false, detail = {}, covarianceGroup = null }: DraftParts): EvidenceDraft {
  const { value, kind, se } = stored
  return { quantity, value: { value, kind, se: kind === '=' ? se : null, interval: intervalOf(stored, isPositive), unit: evidenceQuantity(quantity).unit }, conditions: { ...conditions }, covarianceGroup, detail }
}

import { UNIT_ROWS, type Dimension, type UnitRow } from './unitTable'

export type { Dimension } from './unitTable'

/** A unit of one dimension. Conversion happens at the border only: reading a file or a form, and display. */
export interface Unit {
  readonly dimension: Dimension
  /** As shown on screens; a power is written `s^-1`. */
  readonly symbol: string
  /** Accepted in files besides the symbol. */
  readonly spellings: readonly string[]
  /** Value in the stored unit of the dimension (s, s⁻¹, mM, mM⁻¹ s⁻¹, K, T, ...). */
  toSi: (value: number) => number
  /** Value in this unit from the stored one. */
  fromSi: (value: number) => number
}

export type UnitParse =
  | { readonly ok: true, readonly unit: Unit }
  | { readonly ok: false, readonly reason: 'unknownUnit', readonly message: string, readonly accepted: readonly string[] }

function makeUnit(dimension: Dimension, { symbol, spellings, times, over, plus }: UnitRow): Unit {
  return {
    dimension, symbol, spellings,
    toSi: value => (value * times) / over + plus,
    fromSi: value => ((value - plus) * over) / times,
  }
}

/** Every unit of every dimension; the first of each is the stored one. */
export const UNITS = Object.fromEntries(
  (Object.keys(UNIT_ROWS) as Dimension[]).map(dimension => [dimension, UNIT_ROWS[dimension].map(row => makeUnit(dimension, row))]),
) as unknown as Readonly<Record<Dimension, readonly [Unit, ...Unit[]]>>

/** The unit in which values of a dimension are stored. */
export function storedUnit(dimension: Dimension): Unit {
  return UNITS[dimension][0]
}

/**
 * Finds the unit that a text names.
 *
 * Symbols are compared as they stand, because case carries meaning (mM, MM); lower-case words of three letters or more without regard to case. The two
 * code points of µ, the superscripts, the minus sign and a dot or a middle dot between factors are taken for their plain forms.
 */
export function parseUnit(text: string, dimension: Dimension): UnitParse {
  const wanted = plainForm(text)
  const unit = UNITS[dimension].find(candidate => [candidate.symbol, ...candidate.spellings].some(spelling => isSame(plainForm(spelling), wanted)))
  if (unit) return { ok: true, unit }
  const accepted = UNITS[dimension].map(candidate => candidate.symbol || '1')
  return { ok: false, reason: 'unknownUnit', message: `'${text.trim()}' is not a unit of ${dimension}.`, accepted }
}

/** @throws Error for a symbol that is not in the table: for symbols written in code, not by people */
export function unitOf(symbol: string, dimension: Dimension): Unit {
  const unit = UNITS[dimension].find(candidate => candidate.symbol === symbol)
  if (!unit) throw new Error(`The unit table has no ${symbol} for ${dimension}.`)
  return unit
}

export function toStored(value: number, unit: Unit): number {
  return unit.toSi(value)
}

export function fromStored(value: number, unit: Unit): number {
  return unit.fromSi(value)
}

export const msToS = (value_ms: number): number => value_ms / 1000
export const sToMs = (value_s: number): number => value_s * 1000
export const celsiusToKelvin = unitOf('°C', 'temperature').toSi
export const kelvinToCelsius = unitOf('°C', 'temperature').fromSi
export const protonMHzToTesla = unitOf('MHz', 'field').toSi
export const teslaToProtonMHz = unitOf('MHz', 'field').fromSi
export const degreesToRadians = unitOf('°', 'angle').toSi
export const radiansToDegrees = unitOf('°', 'angle').fromSi
export const mMToM = (conc_mM: number): number => conc_mM / 1000
export const mToMM = (conc_M: number): number => conc_M * 1000
export const umToMM = unitOf('µM', 'concentration').toSi
export const mMToUm = unitOf('µM', 'concentration').fromSi

const SUPERSCRIPTS = '⁰¹²³⁴⁵⁶⁷⁸⁹'

function plainForm(text: string): string {
  return text.trim()
    .replace(/[\u03BC\u00B5]/g, 'µ')
    .replace(/⁻|⁺|[⁰¹²³⁴⁵⁶⁷⁸⁹]+/g, part => part === '⁻' ? '^-' : part === '⁺' ? '' : [...part].map(digit => SUPERSCRIPTS.indexOf(digit)).join(''))
    .replace(/\u2212/g, '-')
    .replace(/\u212B|\u00C5/g, 'Å')
    .replace(/\u00BA/g, '°')
    .replace(/([A-Za-zµ])(-\d)/g, '$1^$2')
    .replace(/[·⋅]/g, ' ')
    .replace(/\s+/g, ' ')
}

function isSame(spelling: string, wanted: string): boolean {
  if (spelling === wanted) return true
  const isWord = /^[a-z ]{3,}$/
  return isWord.test(spelling) && spelling.toLowerCase() === wanted.toLowerCase()
}

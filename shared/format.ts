/**
 * How numbers are written for people: decimal point, true minus, groups of five or more digits with a thin space, 10 to a power instead of E.
 * Output is notation (see shared/notation.ts): `2.1 × 10^{-6}`.
 */
const THIN = '\u2009'
export const NBSP = '\u00A0'
const MINUS = '−'
export const NOT_MEASURED = 'not measured'
/** A double carries 15 to 17 significant digits; more would be invented. */
const MOST_DECIMALS = 12
const ZERO_K_IN_CELSIUS = 273.15

/** Parts of a value with its error, kept apart so that a table can set them in two cells. Null error = none can be given. */
export interface WrittenValue { value: string, plusMinus: string | null, interval: string | null, power: number | null }
export interface Interval { low: number, high: number }

/** Number of decimals that shows `se` with two significant digits; may be negative (230 → -1). */
export function decimalsForError(se: number): number {
  const decimals = 1 - exponentOf(se)
  // 0.0996 rounds up to 0.10: its second digit has moved by one place.
  return exponentOf(Number(se.toPrecision(2))) > exponentOf(se) ? decimals - 1 : decimals
}

/** Decimals so that a bare number shows `digits` significant digits. */
export function decimalsForDigits(value: number, digits: number): number {
  return value === 0 ? digits - 1 : digits - 1 - exponentOf(Number(value.toPrecision(digits)))
}

/** A number with a fixed count of decimals; negative counts round to tens, hundreds. `not measured` for null and what is not finite. */
export function formatFixed(value: number | null, decimals: number): string {
  if (value === null || !Number.isFinite(value)) return NOT_MEASURED
  const places = Math.min(decimals, MOST_DECIMALS)
  const rounded = places < 0 ? Math.round(value / 10 ** -places) * 10 ** -places : value
  const text = Math.abs(rounded).toFixed(Math.max(places, 0))
  const isZero = Number(text) === 0
  return (rounded < 0 && !isZero ? MINUS : '') + grouped(text)
}

/** A bare number with at most so many significant digits; zeros at the end would claim what nobody measured. 10 to a power below 0.001 and from a million. */
export function formatNumber(value: number | null, digits = 3): string {
  if (value === null || !Number.isFinite(value)) return NOT_MEASURED
  if (needsPower(value)) return formatPower(value, digits)
  return formatFixed(value, decimalsNeeded(value, digits))
}

/** A whole number, in groups from five digits on. */
export function formatCount(value: number): string {
  return formatFixed(value, 0)
}

/** `2.1 × 10^{-6}` with at most so many digits; `10^{-6}` alone when the factor is 1 and one digit is asked for. */
export function formatPower(value: number, digits = 2): string {
  if (value === 0 || !Number.isFinite(value)) return value === 0 ? '0' : NOT_MEASURED
  const [factor, exponent] = value.toExponential(digits - 1).split('e') as [string, string]
  const power = `10^{${Number(exponent)}}`.replace('{-', `{${MINUS}`)
  const shortest = String(Number(factor))
  return digits === 1 && shortest === '1' ? power : `${signed(shortest)}${NBSP}×${NBSP}${power}`
}

/** Value rounded to its error, error with two significant digits. Without an error: at most three significant digits. */
export function writeValue(value: number, se: number | null, interval: Interval | null = null): WrittenValue {
  if (!Number.isFinite(value)) return { value: NOT_MEASURED, plusMinus: null, interval: null, power: null }
  const power = needsPower(value) ? exponentOf(value) : null
  const scale = power === null ? 1 : 10 ** power
  const isGiven = se !== null && Number.isFinite(se) && se > 0
  const spread = isGiven ? se : interval ? (interval.high - interval.low) / 4 : null
  const decimals = spread !== null && spread > 0 ? decimalsForError(spread / scale) : decimalsNeeded(value / scale, 3)
  const write = (one: number) => formatFixed(one / scale, decimals)
  return {
    value: write(value),
    plusMinus: isGiven ? write(se) : null,
    interval: interval ? `${write(interval.low)} to ${write(interval.high)}` : null,
    power,
  }
}

/** Whether the 95 % interval is lopsided enough that ± would mislead: its halves differ by more than a fifth. */
export function isLopsided(value: number, interval: Interval | null): boolean {
  if (!interval) return false
  const below = value - interval.low
  const above = interval.high - value
  return Math.abs(above - below) > 0.2 * Math.max(Math.abs(above), Math.abs(below))
}

/**
 * One count of decimals for a whole column: what half of its errors ask for, but enough that every error shows a digit; at most `most`.
 * The finest error alone must not make the others claim digits they do not have.
 */
export function columnDecimals(cells: readonly { value: number | null, se: number | null }[], most = 6): number {
  const wanted = cells.flatMap(({ value, se }) => {
    if (value === null || !Number.isFinite(value)) return []
    return [se !== null && se > 0 && Number.isFinite(se) ? decimalsForError(se) : decimalsNeeded(value, 3)]
  }).sort((a, b) => a - b)
  const half = wanted[Math.floor((wanted.length - 1) / 2)] ?? 0
  return Math.min(Math.max(half, (wanted.at(-1) ?? 0) - 1, 0), most)
}

/** `37.0 °C` from kelvin. */
export function formatCelsius(temperature_K: number | null, decimals = 1): string {
  if (temperature_K === null || !Number.isFinite(temperature_K)) return NOT_MEASURED
  return `${formatFixed(temperature_K - ZERO_K_IN_CELSIUS, decimals)}${NBSP}°C`
}

/** From which size on a unit is used, and its length. Small counts read better in the smaller unit: 90 min, not 1.5 h. */
const DURATIONS: readonly { from_s: number, size_s: number, unit: string }[] = [
  { from_s: 31_557_600, size_s: 31_557_600, unit: 'y' }, { from_s: 172_800, size_s: 86_400, unit: 'd' }, { from_s: 7200, size_s: 3600, unit: 'h' },
  { from_s: 120, size_s: 60, unit: 'min' }, { from_s: 1, size_s: 1, unit: 's' }, { from_s: 1e-3, size_s: 1e-3, unit: 'ms' },
]

/** A time on the scale that people use: ms below 1 s, then s, min, h, d, y (years of 365.25 days). */
export function formatDuration(duration_s: number | null, digits = 3): string {
  if (duration_s === null || !Number.isFinite(duration_s)) return NOT_MEASURED
  const { size_s, unit } = DURATIONS.find(row => Math.abs(duration_s) >= row.from_s) ?? { size_s: 1e-6, unit: 'µs' }
  return `${formatNumber(duration_s / size_s, digits)}${NBSP}${unit}`
}

/** Bytes as people write them, in powers of 1000. */
export function formatBytes(bytes: number): string {
  const steps: readonly (readonly [number, string])[] = [[1e9, 'GB'], [1e6, 'MB'], [1e3, 'kB']]
  const step = steps.find(([size]) => bytes >= size)
  return step ? `${formatNumber(bytes / step[0])}${NBSP}${step[1]}` : `${formatCount(bytes)}${NBSP}bytes`
}

/**
 * Reads a number as people type it: decimal point or decimal comma, spaces in groups, a true minus, 1e-6 or 2.1 × 10^-6.
 * @returns null when it is no number. "1,234.5" is refused: nobody can tell which sign is the decimal one.
 */
export function readNumber(text: string): number | null {
  const plain = text.trim().replace(/[\s\u2009\u00A0\u202F]/g, '').replaceAll(MINUS, '-').replace(/[×x*]10\^?\{?([-+]?\d+)\}?$/i, 'e$1')
  const pointed = !plain.includes('.') && plain.split(',').length === 2 ? plain.replace(',', '.') : plain
  if (!/^[-+]?(\d+\.?\d*|\.\d+)(e[-+]?\d+)?$/i.test(pointed)) return null
  const value = Number(pointed)
  return Number.isFinite(value) ? value : null
}

/** Decimals that show a value to `digits` significant digits without zeros at its end. */
function decimalsNeeded(value: number, digits: number): number {
  const [, fraction = ''] = Number(value.toPrecision(digits)).toFixed(Math.min(Math.max(decimalsForDigits(value, digits), 0), MOST_DECIMALS)).split('.')
  return fraction.replace(/0+$/, '').length
}
function exponentOf(value: number): number {
  return value === 0 ? 0 : Number(value.toExponential().split('e')[1])
}
function needsPower(value: number): boolean {
  const size = Math.abs(value)
  return size !== 0 && (size < 1e-3 || size >= 1e6)
}
function signed(text: string): string {
  return text.replace('-', MINUS)
}
function grouped(text: string): string {
  const [whole = '', fraction] = text.split('.')
  const split = whole.length >= 5 ? whole.replace(/\B(?=(\d{3})+(?!\d))/g, THIN) : whole
  return fraction === undefined ? split : `${split}.${fraction}`
}

/** Decimal mark of a file. */
export type DecimalMark = 'point' | 'comma'

export type NumberCell =
  | { ok: true, value: number }
  | { ok: false, reason: 'empty' | 'notFinite' | 'otherDecimal' | 'grouped' | 'bound' | 'text' }

/** Marks that part thousands without doubt: spaces (plain, no-break, thin, narrow no-break) and apostrophes. */
const GROUP = '[ \\u00A0\\u2009\\u202F\'\u2019]'
const DIGITS = `\\d{1,3}(?:${GROUP}\\d{3})+|\\d+`
const SHAPE: Record<DecimalMark, RegExp> = {
  point: new RegExp(`^([-+\\u2212]?)(?:(${DIGITS})(?:\\.(\\d*))?|\\.(\\d+))(?:[eE]([-+\\u2212]?\\d{1,4}))?$`),
  comma: new RegExp(`^([-+\\u2212]?)(?:(${DIGITS})(?:,(\\d*))?|,(\\d+))(?:[eE]([-+\\u2212]?\\d{1,4}))?$`),
}
const NOT_FINITE = /^[-+]?(?:nan|inf|infinity|∞|n\/?a|null|none|nil|#[a-z0-9/!?]+|overflow|error)$/i

/**
 * Reads one number strictly: sign, digits, one decimal mark, exponent; spaces may part thousands.
 *
 * Never guesses: '1,234' in a file with decimal points is neither 1.234 nor 1234, but refused.
 */
export function parseNumberCell(text: string, decimal: DecimalMark): NumberCell {
  const cell = text.trim()
  if (cell === '') return { ok: false, reason: 'empty' }
  const match = SHAPE[decimal].exec(cell)
  if (match) {
    const [, sign, whole, part, bare, exponent] = match
    const value = Number(`${plainSign(sign)}${(whole ?? '').replace(/\D/g, '') || '0'}.${part || bare || '0'}e${plainSign(exponent) || '0'}`)
    return Number.isFinite(value) ? { ok: true, value } : { ok: false, reason: 'notFinite' }
  }
  if (NOT_FINITE.test(cell)) return { ok: false, reason: 'notFinite' }
  if (SHAPE[decimal === 'point' ? 'comma' : 'point'].test(cell)) return { ok: false, reason: 'otherDecimal' }
  if (/^[-+\u2212]?\d{1,3}(?:[.,]\d{3})+(?:[.,]\d+)?$/.test(cell)) return { ok: false, reason: 'grouped' }
  if (/^[<>≤≥]/.test(cell)) return { ok: false, reason: 'bound' }
  return { ok: false, reason: 'text' }
}

/** Reads a number whose decimal mark is its own matter: a header line, a tube's name. */
export function parseLooseNumber(text: string): NumberCell {
  const mark: DecimalMark = text.includes(',') && !text.includes('.') ? 'comma' : 'point'
  return parseNumberCell(text, mark)
}

export function isNumberInEither(text: string): boolean {
  return parseNumberCell(text, 'point').ok || parseNumberCell(text, 'comma').ok
}

function plainSign(text: string | undefined): string {
  return (text ?? '').replace('\u2212', '-')
}

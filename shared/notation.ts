/**
 * Texts with raised and lowered parts, as data: `r_1`, `mM^-1 s^-1`, `10^{-6}`, `t_{1/2}`, `χ²_{red}`.
 * The shipped fonts have no U+207B, no raised 0 or 4 to 9 and no lowered digits; such characters are read as notation, so that a
 * screen shows raised and lowered text in the right face whatever the source of the words.
 */
export interface NotationPart { text: string, at: 'base' | 'sup' | 'sub' }

const RAISED = '⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻ⁿ'
const RAISED_PLAIN = '0123456789+−n'
const LOWERED = '₀₁₂₃₄₅₆₇₈₉'
const MARKED = new RegExp(`([${RAISED}]+)|([${LOWERED}]+)|\\^\\{([^}]*)\\}|_\\{([^}]*)\\}|\\^([-+−]?\\d+(?:\\.\\d+)?)|_(\\d+)`, 'gu')
/** Words for signs that the fonts lack. */
const WORDS: readonly (readonly [RegExp, string])[] = [[/≤ ?/g, 'at most '], [/≥ ?/g, 'at least '], [/≈ ?/g, 'about '], [/ ?→ ?/g, ' to '], [/‡/g, 'act.']]

/**
 * Splits a text into parts at the base line, raised and lowered.
 * A hyphen in a raised part becomes a true minus. Underscores before letters (file names) are left as they are.
 */
export function parseNotation(text: string): NotationPart[] {
  const parts: NotationPart[] = []
  let end = 0
  for (const match of text.matchAll(MARKED)) {
    if (match.index > end) parts.push({ text: inWords(text.slice(end, match.index)), at: 'base' })
    parts.push(partOf(match))
    end = match.index + match[0].length
  }
  if (end < text.length) parts.push({ text: inWords(text.slice(end)), at: 'base' })
  return parts
}

/** The same text on one line, for `title`, `aria-label` and copied text: `mM^-1` stays readable as "mM^−1". */
export function plainNotation(text: string): string {
  return parseNotation(text).map(part => part.at === 'sup' && !/^[²³]$/.test(part.text) ? `^${part.text}` : part.text).join('')
}

function partOf(match: RegExpMatchArray): NotationPart {
  const [, raised, lowered, inBraces, belowInBraces, digitsAbove, digitsBelow] = match
  if (raised !== undefined) return { text: [...raised].map(sign => RAISED_PLAIN[RAISED.indexOf(sign)] ?? sign).join(''), at: 'sup' }
  if (lowered !== undefined) return { text: [...lowered].map(sign => String(LOWERED.indexOf(sign))).join(''), at: 'sub' }
  const above = inBraces ?? digitsAbove
  if (above !== undefined) return { text: above.replaceAll('-', '−'), at: 'sup' }
  return { text: belowInBraces ?? digitsBelow ?? '', at: 'sub' }
}

function inWords(text: string): string {
  return WORDS.reduce((out, [sign, words]) => out.replace(sign, words), text)
}

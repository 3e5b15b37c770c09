import { z } from 'zod'

/** Field schemas whose refusals say what was given and what is accepted. */

/** A finite number between two ends, both allowed. `unit` is written as on screens. */
export function numberWithin(what: string, low: number, high: number, unit = ''): z.ZodNumber {
  const accepted = `Accepted: ${low} to ${high}${unit ? ` ${unit}` : ''}.`
  return z.number({ error: issue => issue.input === undefined || issue.input === null ? `${what} is missing. ${accepted}` : `${what} is not a number. ${accepted}` })
    .min(low, { error: issue => `${what} is ${String(issue.input)}, which is too small. ${accepted}` })
    .max(high, { error: issue => `${what} is ${String(issue.input)}, which is too large. ${accepted}` })
}

/** A whole number between two ends. */
export function wholeWithin(what: string, low: number, high: number): z.ZodNumber {
  return numberWithin(what, low, high).int({ error: `${what} must be a whole number. Accepted: ${low} to ${high}.` })
}

/** A text of one line, trimmed, not empty. */
export function lineOf(what: string, most: number) {
  return z.string({ error: `${what} is missing. Accepted: 1 to ${most} characters.` }).trim()
    .min(1, { error: `${what} is empty. Accepted: 1 to ${most} characters.` })
    .max(most, { error: `${what} is too long. Accepted: 1 to ${most} characters.` })
    .regex(/^[^\p{Cc}]*$/u, { error: `${what} holds a control character. Accepted: one line of plain text.` })
}

/** A text that may be left out; '' is read as null. */
export function lineOrNull(what: string, most: number) {
  return z.string({ error: `${what} is not a text.` }).trim()
    .max(most, { error: `${what} is too long. Accepted: at most ${most} characters.` }).nullable().default(null).transform(text => text || null)
}

/** Codes and lots stand in addresses and file columns: no spaces at the ends, no slashes, no markup. */
export function codeOf(what: string, most = 60) {
  const accepted = `Accepted: 1 to ${most} letters, digits, hyphens, dots, underscores, plus signs or single spaces, beginning with a letter or digit.`
  return z.string({ error: `${what} is missing. ${accepted}` }).trim()
    .min(1, { error: `${what} is empty. ${accepted}` }).max(most, { error: `${what} is too long. ${accepted}` })
    .regex(/^[\p{L}\p{N}][\p{L}\p{N}._+-]*( [\p{L}\p{N}._+-]+)*$/u, { error: `${what} holds a character that cannot be used. ${accepted}` })
}

/** One of a list, with the list in the refusal; `words`: how screens call the choices. */
export function oneOf<const T extends readonly [string, ...string[]]>(what: string, options: T, words: readonly string[] = options) {
  const accepted = `Accepted: ${words.join(', ')}.`
  return z.enum(options, { error: ({ input }) => input === '' || input === null || input === undefined ? `${what} is not chosen. ${accepted}` : `${what} is not one of the choices. ${accepted}` })
}

/** A fraction of 1 whose refusals speak per cent, as forms do. */
export function fractionOf(what: string) {
  const accepted = 'Accepted: 0 to 100 %.'
  const shown = (input: unknown): string => String(Number((Number(input) * 100).toPrecision(6)))
  return z.number({ error: ({ input }) => input === undefined || input === null ? `${what} is missing. ${accepted}` : `${what} is not a number. ${accepted}` })
    .min(0, { error: ({ input }) => `${what} is ${shown(input)} %, which is too small. ${accepted}` })
    .max(1, { error: ({ input }) => `${what} is ${shown(input)} %, which is too large. ${accepted}` })
}

/** A day as YYYY-MM-DD. */
export const dayOf = (what: string) => z.iso.date({ error: `${what} is not a day. Accepted: year-month-day, such as 2026-03-02.` })

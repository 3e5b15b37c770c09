/** A value that JSON can carry without loss. */
export type JsonValue = null | boolean | number | string | readonly JsonValue[] | { readonly [key: string]: JsonValue }

/**
 * Writes a value as the one text that stands for it: object keys sorted by UTF-16 code unit, no white space,
 * numbers in the shortest form that reads back to the same double, minus zero as `-0`.
 *
 * Stored points, options and results are compared and hashed as this text, so equal values always give equal text.
 * @param value nested plain objects, arrays, strings, booleans, null and finite numbers
 * @throws TypeError naming the path (`$.points[3].y`) for NaN, an infinity, undefined, a function, a symbol, a bigint,
 *   a typed array, a class instance, a hole in an array or a cycle: JSON would drop or change each of them silently
 */
export function canonicalJson(value: unknown): string {
  return write(value, '$', [])
}

/**
 * Reads text written by {@link canonicalJson}.
 * @throws TypeError when the text is not canonical (white space, unsorted or repeated keys, a longer form of a number), and
 *   SyntaxError when it is not JSON
 */
export function parseCanonicalJson(text: string): JsonValue {
  const value = JSON.parse(text) as JsonValue
  if (canonicalJson(value) !== text) throw new TypeError('This JSON text is not in canonical form.')
  return value
}

function write(value: unknown, path: string, parents: readonly object[]): string {
  if (value === null || value === true || value === false) return String(value)
  if (typeof value === 'string') return JSON.stringify(value)
  if (typeof value === 'number') return writeNumber(value, path)
  if (typeof value !== 'object') throw new TypeError(`Canonical JSON cannot hold ${typeof value} at ${path}.`)
  if (parents.includes(value)) throw new TypeError(`Canonical JSON cannot hold a cycle at ${path}.`)
  const inside = [...parents, value]
  if (Array.isArray(value)) return `[${Array.from(value, (item, i) => write(item, `${path}[${i}]`, inside)).join(',')}]`
  return writeObject(value, path, inside)
}

function writeNumber(value: number, path: string): string {
  if (!Number.isFinite(value)) throw new TypeError(`Canonical JSON cannot hold ${value} at ${path}.`)
  return Object.is(value, -0) ? '-0' : String(value)
}

function writeObject(value: object, path: string, inside: readonly object[]): string {
  const prototype: unknown = Object.getPrototypeOf(value)
  if (prototype !== Object.prototype && prototype !== null) {
    throw new TypeError(`Canonical JSON cannot hold a ${value.constructor?.name ?? 'class instance'} at ${path}.`)
  }
  if (Object.getOwnPropertySymbols(value).length > 0) throw new TypeError(`Canonical JSON cannot hold a symbol key at ${path}.`)
  const record = value as Record<string, unknown>
  const pairs = Object.keys(record).sort().map(key => `${JSON.stringify(key)}:${write(record[key], `${path}.${key}`, inside)}`)
  return `{${pairs.join(',')}}`
}

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
  return write(value, [], [])
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

/** Keys and indices that lead to the value at hand; one array for the whole text, for it is read only when something is wrong. */
type Path = (string | number)[]

const at = (path: Path): string => `$${path.map(step => typeof step === 'number' ? `[${step}]` : `.${step}`).join('')}`

function write(value: unknown, path: Path, parents: object[]): string {
  if (typeof value === 'number') return writeNumber(value, path)
  if (value === null || value === true || value === false) return String(value)
  if (typeof value === 'string') return JSON.stringify(value)
  if (typeof value !== 'object') throw new TypeError(`Canonical JSON cannot hold ${typeof value} at ${at(path)}.`)
  if (parents.includes(value)) throw new TypeError(`Canonical JSON cannot hold a cycle at ${at(path)}.`)
  parents.push(value)
  const text = Array.isArray(value) ? writeArray(value, path, parents) : writeObject(value, path, parents)
  parents.pop()
  return text
}

function writeNumber(value: number, path: Path): string {
  if (!Number.isFinite(value)) throw new TypeError(`Canonical JSON cannot hold ${value} at ${at(path)}.`)
  return Object.is(value, -0) ? '-0' : String(value)
}

function writeArray(value: readonly unknown[], path: Path, parents: object[]): string {
  let text = '['
  for (let i = 0; i < value.length; i++) {
    path.push(i)
    text += i === 0 ? write(value[i], path, parents) : `,${write(value[i], path, parents)}`
    path.pop()
  }
  return `${text}]`
}

function writeObject(value: object, path: Path, parents: object[]): string {
  const prototype: unknown = Object.getPrototypeOf(value)
  if (prototype !== Object.prototype && prototype !== null) {
    throw new TypeError(`Canonical JSON cannot hold a ${value.constructor?.name ?? 'class instance'} at ${at(path)}.`)
  }
  if (Object.getOwnPropertySymbols(value).length > 0) throw new TypeError(`Canonical JSON cannot hold a symbol key at ${at(path)}.`)
  const record = value as Record<string, unknown>
  let text = '{'
  for (const key of Object.keys(record).sort()) {
    path.push(key)
    text += `${text === '{' ? '' : ','}${JSON.stringify(key)}:${write(record[key], path, parents)}`
    path.pop()
  }
  return `${text}}`
}

import { readText } from './tabular/readText'
import { understandTable } from './tabular/understand'
import type { MeasurementKind } from './types'

/** What is enough to see of what kind a file is. */
const LINES = 40
const BYTES = 64 * 1024

/**
 * The kind whose words a text file speaks: conditions named in its lines, and columns known by their heads, counted for every kind. The first of the kinds
 * that says most wins, so that a file that says nothing of its kind is taken for the first of all.
 * @param kinds in the order in which they are offered
 * @returns null for bytes that hold no text table
 */
export function guessKind(bytes: Uint8Array, kinds: readonly MeasurementKind[]): MeasurementKind | null {
  const read = readText(bytes.subarray(0, BYTES))
  if (!read.ok) return null
  const text = read.text.split('\n').slice(0, LINES).join('\n')
  let best: MeasurementKind | null = null
  let most = -1
  for (const kind of kinds) {
    const { found, columns } = understandTable({ text, kind, encoding: read.encoding })
    const said = found.length + columns.filter(column => column.how === 'from the header' && column.stem !== null).length
    if (said > most) [best, most] = [kind, said]
  }
  return best
}

import type { ValueCell } from './cells'

/** A name that the file gives a tube, with its place. */
export interface NamedCell { text: string, row: number, column: number }

export interface RawPoint {
  /** null for kinds without an x, such as tables of results. */
  x: ValueCell | null
  y: ValueCell
  sigma: ValueCell | null
  /** Other numbers of this point (SD over the region, pixels, B1 scale): each cell names its column by its spec. */
  aux: readonly ValueCell[]
}

/** A tube as the table holds it, before any number is read. Every layout comes down to these. */
export interface RawTube {
  /** Stays the same while the person changes their choices: 'column 3', 'row 7', or the words that tell tubes apart. */
  key: string
  label: string
  agent: NamedCell | null
  batch: NamedCell | null
  conc: ValueCell | null
  concSe: ValueCell | null
  points: RawPoint[]
  /** Cells that contradict the concentration of the tube's first row. */
  conflicts: ValueCell[]
  /** Where it stands, in words, and a cell to point at. */
  place: string
  row: number
  column: number
}

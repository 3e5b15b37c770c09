import type { Conditions, PointTable, SeriesTube, UploadProblem } from '../types'
import type { How } from './columns'
import type { Layout } from './layout'
import type { FoundCondition, MetadataLine } from './metadata'
import type { DecimalMark } from './numberCell'
import type { Delimiter } from './records'

export interface UnderstoodColumn {
  /** From 0. */
  index: number
  letter: string
  header: string
  /** null = not read. */
  stem: string | null
  label: string
  /** Symbol of the unit in which the column's numbers are written; null = none known yet, or none needed. */
  unit: string | null
  /** Symbols that would be accepted; empty for columns without a unit. */
  units: string[]
  how: How
  samples: string[]
}

/** A unit that no column head carries: of times across the head, of a row of concentrations. */
export interface LooseUnit { stem: string, label: string, unit: string | null, units: string[], how: How, place: string }

export interface UnderstoodTube {
  /** From 1, in the order of the file. The same number in every series that holds the tube. */
  tubeNo: number
  key: string
  label: string
  role: 'sample' | 'blank' | 'reference' | 'aside'
  /** As the file or the person names them; null = not named, or a blank that all agents share. */
  agent: string | null
  batch: string | null
  conc_mM: number | null
  concSe_mM: number | null
  how: { role: How, agent: How, conc: How }
  place: string
  points: PointTable
  /** Cell of each point's value in the file, both from 1. */
  pointPlaces: { row: number, column: number }[]
}

export interface SeriesPart {
  /** As in UploadDraft; null where tubes name no agent. */
  complexCode: string | null
  lot: string | null
  tubes: (SeriesTube & { key: string, place: string })[]
}

export interface Understood {
  /** Code of the tube sheet that the file names. */
  tubeSheet: string | null
  preview: { row: number, cells: string[] }[]
  rowCount: number
  columnCount: number
  metadata: MetadataLine[]
  /** Sheets of a workbook and the one read; null for a text file. */
  workbook: { sheet: string, sheets: string[] } | null
  /** Encoding of a text file, as it was recognised. */
  encoding: string | null
  delimiter: Delimiter | null
  decimal: DecimalMark
  /** Row of the file, from 1; null = none. */
  headerRow: number | null
  layout: Layout
  how: { delimiter: How, decimal: How, headerRow: How, layout: How }
  columns: UnderstoodColumn[]
  looseUnits: LooseUnit[]
  /** Found in the file, chosen ones included in `conditions`. */
  found: FoundCondition[]
  conditions: Conditions
  tubes: UnderstoodTube[]
  series: SeriesPart[]
  problems: UploadProblem[]
  /** True when nothing blocks: the upload can be stored. */
  canStore: boolean
}

import type { RecordContext } from '../evidence/records/define'
import type { EvidenceDraft } from '../evidence/types'
import type { NamedQuantity } from '../evidence/quantity'
import type { FigureSpec } from '../schemas/figure'
import type { Dimension } from '../science/units'

/** What a column of an uploaded table can be. `role` says where its cells go; `stem` with the stored unit's suffix names the number in points. */
export interface ColumnSpec {
  stem: string
  /** Name of the number in stored points, with the stored unit: 'ti_s', 'signal_au'. */
  field: string
  label: string
  dimension: Dimension | 'text'
  /** aux: a number that goes with each point (SD of the region, its pixels, B1 scale), kept in the points under `field`; an attribute row gives it once for a tube. */
  role: 'tube' | 'agent' | 'batch' | 'conc' | 'concError' | 'x' | 'y' | 'sigma' | 'aux'
  /** Header words, lower case, as people write them; units in brackets are split off before matching. */
  synonyms: readonly string[]
  required: boolean
  help: string
  /** Smallest number allowed, in the stored unit; with `above`, the number itself is not. */
  min?: number
  above?: number
  /** Largest number allowed, in the stored unit. */
  max?: number
  /** Stem of the column whose error this one holds: it settles headers such as 'SD', and gives the unit where the header has none. */
  follows?: string
  /** Numbers without a unit are in the stored one: for rates of relaxation, which the trade gives in no other. */
  bare?: boolean
  /** For aux columns: where no name tells tubes apart, rows that differ here are different tubes. */
  parts?: boolean
  /** A header word that settles a condition: 'T2 (ms)' says that T2 was measured. */
  implies?: { key: string, words: Readonly<Record<string, string>> }
}

export interface ConditionChoice {
  value: string
  label: string
  /** Words, lower case, that name this choice in a file. */
  synonyms?: readonly string[]
}

export interface ConditionSpec {
  /** Name with stored unit, as in conditions JSON: 'temperature_K'. */
  key: string
  label: string
  type: 'number' | 'choice' | 'text' | 'date'
  dimension?: Dimension
  /** Condition that takes the part after ± in a file ('37.0 ± 0.2 °C'). */
  sdKey?: string
  /** Condition that keeps the words of a file where they say more than the choice they stand for ('human plasma'). */
  wordsKey?: string
  /** Unit the form shows; stored is the key's own. */
  shownUnit?: string
  required: boolean
  choices?: readonly ConditionChoice[]
  min?: number
  max?: number
  help: string
  /** Header-line or metadata words that carry this condition in a file. */
  synonyms: readonly string[]
  /** Only asked when another condition has one of these values. */
  when?: { key: string, is: readonly string[] }
}

export type Conditions = Record<string, number | string | null>

/** Points of one tube as stored: columns name the fields, rows keep file order. null = the cell was empty and may be. */
export interface PointTable {
  columns: string[]
  rows: (number | null)[][]
}

export interface SeriesTube {
  tubeNo: number
  label: string
  /** reference: the tube by which the instrument is watched; fitted, and never part of the line. */
  role: 'sample' | 'blank' | 'reference'
  conc_mM: number
  /** Standard error of this tube's own concentration (pipetting); null = not given. */
  concSe_mM: number | null
  points: PointTable
}

/** What a person left out: a point of a tube (index into its rows) or, with index null, the whole tube. */
export interface Exclusion {
  tubeNo: number
  pointIndex: number | null
  reason: string
}

/** A choice of how to fit that is not a model: offered beside the model, checked by the service, stored with the fit and named in its method. */
export interface FitOptionSpec {
  key: string
  label: string
  type: 'choice' | 'integer' | 'number'
  choices?: readonly { value: string, label: string }[]
  min?: number
  max?: number
  unit?: string
  /** What counts when the option is not given. */
  standard: string | number
  help: string
  /** Models for which it is offered; left out: all. */
  models?: readonly string[]
}

/** Correlations of fitted parameters: rows and columns in the order of `names`. */
export interface CorrelationTable {
  names: string[]
  labels: string[]
  matrix: number[][]
}

/** Everything an analysis may read: nothing else enters a fit, so that the same input gives the same bits. */
export interface AnalysisInput {
  kind: string
  conditions: Conditions
  tubes: readonly SeriesTube[]
  exclusions: readonly Exclusion[]
  modelId: string
  options: Readonly<Record<string, number | string | boolean>>
  seed: string
}

export interface Flag {
  id: string
  title: string
  /** What was seen and what to do about it, one or two sentences. */
  sentence: string
  tubeNo: number | null
}

export interface AnalysedPoint {
  index: number
  x: number
  y: number
  fitted: number | null
  residual: number | null
  studentised: number | null
  excluded: string | null
}

export interface FitStatistics {
  rss: number
  dof: number
  reducedChi2: number | null
  aicc: number | null
  r2: number | null
  condition: number | null
  evaluations: number
  stop: string
  sigma: string
}

/** What ml-levenberg-marquardt found from our optimum and from the model's own start; `lower` = it found a lower sum than ours. */
export interface SecondOpinionResult {
  rss: number | null
  relativeDifference: number | null
  lower: boolean
  note: string
}

export interface TubeResult {
  tubeNo: number
  label: string
  role: 'sample' | 'blank' | 'reference'
  conc_mM: number
  /** Reason why the whole tube is left out; null = it counts. */
  excluded: string | null
  /** null where the fit was refused; then refusal says why and what would be accepted. */
  headline: NamedQuantity | null
  parameters: NamedQuantity[]
  refusal: { reason: string, message: string, accepted: string } | null
  points: AnalysedPoint[]
  curve: { x: number, y: number }[]
  flags: Flag[]
  passed: string[]
  statistics: FitStatistics | null
  secondOpinion: SecondOpinionResult | null
  /** Absent in fits of engine 1; null where there is no covariance. */
  correlation?: CorrelationTable | null
  /** How the intervals were found, in words ('Student t, 9 degrees of freedom'). Absent in fits of engine 1. */
  intervalMethod?: string
}

export interface SeriesResult {
  headline: NamedQuantity
  parameters: NamedQuantity[]
  points: { tubeNo: number, label: string, x: number, y: number, ySe: number | null, fitted: number, studentised: number | null, cook: number | null, leaveOneOut: number | null, excluded: string | null }[]
  line: { x: number, y: number }[]
  band: { x: number, low: number, high: number }[]
  /** What the points stand at and show, where that is not a rate over the concentration of the agent. */
  axes?: { x: FigureSpec['x'], y: FigureSpec['y'] }
  /** A second curve through the rates, such as a binding isotherm. Absent where there is none. */
  curve?: { name: string, points: { x: number, y: number }[] }
  statistics: { label: string, value: number | null, text: string }[]
  /** Absent in fits of engine 1. */
  correlation?: CorrelationTable | null
}

export type AnalysisOutcome =
  | { ok: true, tubes: TubeResult[], series: SeriesResult, flags: Flag[], passed: string[], method: string }
  | { ok: false, reason: string, message: string, accepted: string, tubes: TubeResult[] }

/** One thing wrong with a file or form, where, and what would be accepted. row and column are those of the file, from 1; null = the whole file or form. */
export interface UploadProblem {
  id: string
  row: number | null
  column: number | null
  /** Field of the form at fault, where it is one ('conditions.temperature_K', 'tubes.3.conc_mM'). */
  field: string | null
  message: string
  accepted: string
  severity: 'blocks' | 'asks'
  /** Sheet of a workbook that row and column belong to; absent for text files and for problems of the form. */
  sheet?: string
}

/**
 * A measurement kind: everything that upload, preview, store, fit, check, export and provenance need to know of it, declared once.
 * Adding a kind is adding one file to shared/measurements and one line to its index.
 */
export interface MeasurementKind {
  kind: string
  version: number
  title: string
  /** A line for the person who chooses what to upload. */
  purpose: string
  columns: readonly ColumnSpec[]
  /** What a tube's name may tell. 'course': it names a flask ('0.1 M HCl') and says nothing of the agent or its concentration, nor is a blank expected. Left out: 'agent'. */
  labelsName?: 'agent' | 'course'
  /** Condition that gives the concentration of every tube for which the table has none. */
  concFrom?: string
  /** Heading of the series on screens, with a note. Left out: the slope of a relaxivity. */
  seriesWords?: { title: string, note: string }
  conditions: readonly ConditionSpec[]
  layouts: readonly ('long' | 'columnPerTube' | 'rowPerTube')[]
  /** Template files that people download: name and text. */
  templates: readonly { fileName: string, text: string }[]
  /** within: ids of models that contain this one as a special case; an F-test may compare it with those. */
  models: readonly { id: string, version: number, title: string, within?: readonly string[] }[]
  defaultModel: (conditions: Conditions) => string
  /** Proposes an acquisition for tubes whose relaxation times lie between two: values of the x column in stored units, and why these. Left out: none. */
  propose?: (expected: { shortest_s: number, longest_s: number, tr_s: number | null }) => { values: number[], why: string } | null
  /** Choices beside the model; left out: none. */
  options?: readonly FitOptionSpec[]
  /** What the registry says of the agent: conditions that count where neither file nor person gives them, and what contradicts it. Left out: nothing is asked of it. */
  registered?: (agent: RecordContext, conditions: Conditions) => { conditions: Conditions, problems: UploadProblem[] }
  /** Problems of complete tubes with their conditions, beyond single cells. */
  checkTubes: (tubes: readonly SeriesTube[], conditions: Conditions) => UploadProblem[]
  /** Fits tubes and series. Pure, deterministic, worker-safe: JSON in, JSON out. */
  analyse: (input: AnalysisInput) => AnalysisOutcome
  /** What a complete analysis says about the agent, for map, pages and exports. */
  evidence: (outcome: Extract<AnalysisOutcome, { ok: true }>, input: AnalysisInput) => EvidenceDraft[]
  /** Conditions in one line as the trade writes them: 'r1, 3 T, 37 °C, plasma'. */
  describe: (conditions: Conditions) => string
  /** Figure of the whole series and of one tube, ready to draw. */
  seriesFigure: (outcome: AnalysisOutcome) => FigureSpec | null
  tubeFigure: (tube: TubeResult) => FigureSpec
}

export const defineMeasurement = (kind: MeasurementKind): MeasurementKind => kind

import type { TubeDraft, UploadDraft } from '../draft'
import type { ColumnSpec, Conditions, MeasurementKind, PointTable, UploadProblem } from '../types'
import { readCell, type ValueCell } from './cells'
import type { How } from './columns'
import { specsOf } from './layout'
import { UPLOAD_LIMITS } from './limits'
import { parseLooseNumber, type DecimalMark } from './numberCell'
import { asks, blocks, note, quoted } from './problem'
import type { RawPoint, RawTube } from './rawTube'
import { isBlankName, isReferenceName, readNames, readTubeLabel, type LabelGuess } from './tubeLabel'
import { onSheet, type SheetFacts, type SheetTube } from './tubeSheet'
import type { UnderstoodTube } from './understood'

export interface FinishInput {
  kind: MeasurementKind
  conditions: Conditions
  draft: UploadDraft
  decimal: DecimalMark
  /** Agent and batch that a line above the table names for all tubes. */
  named: { agent: string | null, batch: string | null }
  problems: UploadProblem[]
  sheet: SheetFacts | null
}

/** Reads the numbers of every tube and settles name, role, concentration and agent: the person's choice, then the file, then the tube's name. */
export function finishTubes(raw: readonly RawTube[], input: FinishInput): UnderstoodTube[] {
  const { problems } = input
  if (raw.length > UPLOAD_LIMITS.tubes) {
    problems.push(blocks('tooManyTubes', `The table has ${raw.length} tubes; the limit is ${UPLOAD_LIMITS.tubes}.`, 'another layout chosen, or the file split by agent'))
    return []
  }
  const bare = bareConcentrations(raw, input)
  return raw.map((tube, index) => finishTube(tube, index, bare, input))
}

function finishTube(raw: RawTube, index: number, bare: ReadonlyMap<string, number>, input: FinishInput): UnderstoodTube {
  const { draft, problems } = input
  const choice = draft.tubes?.find(candidate => candidate.key === raw.key)
  const label = choice?.label || raw.label || nameFor(raw, index)
  checkLabel(label, raw, problems)
  const guess = input.kind.labelsName === 'course' ? SAYS_NOTHING : readTubeLabel(raw.label)
  const planned = onSheet(raw.label, input.sheet)
  const conc = settleConcentration(raw, choice, guess.conc_mM ?? planned?.conc_mM ?? bare.get(raw.key) ?? ofAllTubes(input), input)
  const role = choice?.role ?? guessRole(raw, guess, { conc_mM: conc.value, planned })
  const agent = settleAgent(raw, { role, guess, choice, planned }, input)
  const { table, places } = readPoints(raw, input)
  const tube: UnderstoodTube = {
    tubeNo: index + 1, key: raw.key, label, role, agent: agent.agent, batch: agent.batch,
    conc_mM: role === 'blank' || role === 'reference' ? conc.value ?? 0 : conc.value,
    concSe_mM: choice?.concSe_mM !== undefined ? choice.concSe_mM : raw.concSe ? readCell(raw.concSe, input.decimal, problems) : guess.concSe_mM ?? plannedError(planned, conc.value),
    how: { role: choice?.role === undefined ? 'guessed' : 'chosen', agent: agent.how, conc: conc.how },
    place: raw.place, points: table, pointPlaces: places,
  }
  note(problems, ...tubeProblems(tube, raw, input.kind))
  return tube
}

const SAYS_NOTHING: LabelGuess = { role: 'sample', conc_mM: null, concSe_mM: null, agent: null, batch: null }

function ofAllTubes({ kind, conditions }: FinishInput): number | null {
  const value = kind.concFrom === undefined ? null : conditions[kind.concFrom]
  return typeof value === 'number' ? value : null
}

function nameFor(raw: RawTube, index: number): string {
  const conc = raw.conc && raw.conc.text !== '' ? `${raw.conc.text} ${raw.conc.unit?.symbol ?? ''}`.trim() : null
  return [raw.agent?.text, conc].filter(Boolean).join(' ') || `tube ${index + 1}`
}

function checkLabel(label: string, raw: RawTube, problems: UploadProblem[]): void {
  if (label.length <= UPLOAD_LIMITS.labelLength) return
  problems.push(blocks('longLabel', `The name of the tube has ${label.length} characters.`, `a name of at most ${UPLOAD_LIMITS.labelLength} characters`, { row: raw.row, column: raw.column }))
}

/** Heads that are bare numbers: concentrations, unless they only count the tubes. */
function bareConcentrations(raw: readonly RawTube[], { kind, draft, problems }: FinishInput): Map<string, number> {
  if (kind.labelsName === 'course') return new Map()
  const open = raw.filter(tube => tube.conc === null && tube.key.startsWith('column'))
  const values = open.map(tube => parseLooseNumber(tube.label))
  const numbers = values.flatMap(value => value.ok ? [value.value] : [])
  const areCounts = numbers.every((value, i) => value === i + 1)
  if (numbers.length < 2 || areCounts || numbers.some(value => value < 0)) return new Map()
  const guessed = open.flatMap((tube, i) => { const value = values[i]; return value?.ok ? [[tube.key, value.value] as const] : [] })
  const first = open.find(tube => draft.tubes?.every(choice => choice.key !== tube.key || choice.conc_mM === undefined) ?? true)
  if (first) problems.push(asks('bareConcentrations', 'The heads of the tubes are bare numbers: they are taken for concentrations in mM.', 'heads with a unit (0.5 mM), or the concentrations typed', { row: first.row, column: first.column }))
  return new Map(guessed)
}

function settleConcentration(raw: RawTube, choice: TubeDraft | undefined, guess: number | null, { decimal, problems }: FinishInput): { value: number | null, how: How } {
  if (choice?.conc_mM !== undefined) return { value: choice.conc_mM, how: 'chosen' }
  if (raw.conc && raw.conc.text !== '') return { value: readCell(raw.conc, decimal, problems), how: 'from the header' }
  return { value: guess, how: 'guessed' }
}

/** The error on a tube sheet belongs to the concentration on it, not to another one that the file has. */
function plannedError(planned: SheetTube | null, conc_mM: number | null): number | null {
  return planned !== null && planned.conc_mM === conc_mM ? planned.concSe_mM : null
}

function guessRole(raw: RawTube, guess: LabelGuess, { conc_mM, planned }: { conc_mM: number | null, planned: SheetTube | null }): Exclude<UnderstoodTube['role'], 'aside'> {
  if (isReferenceName(raw.label)) return 'reference'
  if (conc_mM === 0 || (raw.agent !== null && isBlankName(raw.agent.text))) return 'blank'
  if (planned !== null && (raw.conc === null || raw.conc.text === '')) return planned.role
  return conc_mM === null || guess.conc_mM !== null ? guess.role : 'sample'
}

type Owner = { agent: string | null, batch: string | null, how: How }

interface Known { role: UnderstoodTube['role'], guess: LabelGuess, choice: TubeDraft | undefined, planned: SheetTube | null }

/** A blank belongs to one agent only where the file or the person says so; otherwise all agents share it. */
function settleAgent(raw: RawTube, { role, guess, choice, planned }: Known, { kind, draft, named }: FinishInput): Owner {
  const inFile = { agent: raw.agent && !isBlankName(raw.agent.text) && /\w/.test(raw.agent.text) ? raw.agent.text : null, batch: raw.batch && /\w/.test(raw.batch.text) ? raw.batch.text : null }
  const isShared = role === 'blank' || role === 'reference'
  const fromLabel = isShared || kind.labelsName === 'course' ? { agent: null, batch: null } : guess.agent !== null ? guess : planned !== null ? { agent: planned.agent, batch: planned.lot } : sampleName(raw)
  const standard = isShared ? { agent: null, batch: null } : { agent: draft.complexCode ?? null, batch: draft.lot ?? null }
  const lines = isShared ? { agent: null, batch: null } : named
  const agent = choice?.complexCode !== undefined ? choice.complexCode : inFile.agent ?? standard.agent ?? lines.agent ?? fromLabel.agent
  const batch = choice?.lot !== undefined ? choice.lot : inFile.batch ?? standard.batch ?? lines.batch ?? fromLabel.batch
  const how: How = choice?.complexCode !== undefined || (inFile.agent === null && standard.agent !== null) ? 'chosen' : inFile.agent ?? lines.agent ? 'from the header' : 'guessed'
  return { agent, batch, how }
}

/** In a table with concentrations of their own column, the tube's name can be the agent's. */
function sampleName(raw: RawTube): { agent: string | null, batch: string | null } {
  const isSplit = raw.conc !== null && raw.key.endsWith(`|${raw.conc.text}`) && raw.label !== ''
  return isSplit ? readNames(raw.label) : { agent: null, batch: null }
}

function readPoints(raw: RawTube, input: FinishInput): { table: PointTable, places: UnderstoodTube['pointPlaces'] } {
  const hasSigma = raw.points.some(point => point.sigma !== null && point.sigma.text !== '')
  const aux = specsOf(input.kind, 'aux').filter(spec => raw.points.some(point => point.aux.some(cell => cell.spec.stem === spec.stem && cell.text !== '')))
  const fields = [...pointFields(raw.points[0], input.kind, hasSigma), ...aux.map(spec => spec.field)]
  const rows: (number | null)[][] = []
  const places: UnderstoodTube['pointPlaces'] = []
  for (const point of raw.points) {
    const row = readPoint(point, hasSigma, input)
    if (row === null) continue
    rows.push([...row, ...aux.map(spec => readAux(point, spec, input))])
    places.push({ row: point.y.row, column: point.y.column })
  }
  return { table: { columns: fields, rows }, places }
}

function pointFields(point: RawPoint | undefined, kind: MeasurementKind, hasSigma: boolean): string[] {
  const x = point?.x?.spec ?? specsOf(kind, 'x')[0]
  const y = point?.y.spec ?? specsOf(kind, 'y')[0]
  const sigma = sigmaSpec(kind, y)
  return [x?.field, y?.field, hasSigma ? sigma?.field : undefined].filter(field => field !== undefined)
}

/** The error column of this value: the one that follows it, whatever head it had. */
function sigmaSpec(kind: MeasurementKind, y: ColumnSpec | undefined): ColumnSpec | undefined {
  const specs = specsOf(kind, 'sigma')
  return specs.find(spec => spec.follows === y?.stem) ?? specs[0]
}

function readPoint(point: RawPoint, hasSigma: boolean, { kind, decimal, problems }: FinishInput): (number | null)[] | null {
  if (point.x === null && specsOf(kind, 'x').length > 0) return null
  if (point.y.text === '' && (point.x === null || point.x.text === '')) return null
  if (point.y.text === '') {
    note(problems, asks('emptyValue', `${point.y.spec.label}: the cell is empty, so the row is no point.`, 'a number, or the row as it is: not measured', { row: point.y.row, column: point.y.column }))
    return null
  }
  if (point.x?.text === '') note(problems, blocks('emptyX', `${point.x.spec.label}: the cell is empty.`, 'a number in every row that has a value', { row: point.x.row, column: point.x.column }))
  const read = (cell: ValueCell | null) => cell === null ? null : readCell(cell, decimal, problems)
  const x = read(point.x)
  const y = read(point.y)
  const sigma = hasSigma ? read(point.sigma) : null
  if (y === null || (point.x !== null && x === null)) return null
  return [...(point.x === null ? [] : [x]), y, ...(hasSigma ? [sigma] : [])]
}

function readAux(point: RawPoint, spec: ColumnSpec, { decimal, problems }: FinishInput): number | null {
  const cell = point.aux.find(candidate => candidate.spec.stem === spec.stem)
  return cell === undefined || cell.text === '' ? null : readCell(cell, decimal, problems)
}

function tubeProblems(tube: UnderstoodTube, raw: RawTube, { concFrom }: MeasurementKind): UploadProblem[] {
  if (tube.role === 'aside') return []
  const where = { row: raw.row, column: raw.column }
  const problems: UploadProblem[] = raw.conflicts.map(cell => blocks('concentrationVaries', `Tube ${quoted(tube.label)} has concentration ${quoted(raw.conc?.text ?? '')} in row ${raw.conc?.row} and ${quoted(cell.text)} here.`,
    'one concentration per tube, or another tube name', { row: cell.row, column: cell.column }))
  const field = (name: string) => ({ ...where, field: `tubes.${tube.tubeNo}.${name}` })
  if (tube.role === 'sample' && tube.conc_mM === null && (raw.conc === null || raw.conc.text === '')) {
    problems.push(blocks('noConcentration', `Tube ${quoted(tube.label)} has no concentration.`, 'a concentration in mM, or the role blank', concFrom === undefined ? field('conc_mM') : { field: `conditions.${concFrom}` }))
  }
  if (tube.conc_mM !== null && tube.conc_mM < 0) problems.push(blocks('outOfDomain', `The concentration of tube ${quoted(tube.label)} is negative.`, 'a concentration of 0 or more', field('conc_mM')))
  if (tube.concSe_mM !== null && tube.concSe_mM < 0) problems.push(blocks('outOfDomain', `The concentration error of tube ${quoted(tube.label)} is negative.`, 'an error of 0 or more, or none', field('concSe_mM')))
  if (tube.role === 'blank' && (tube.conc_mM ?? 0) > 0) problems.push(blocks('blankWithAgent', `Tube ${quoted(tube.label)} is a blank and has a concentration.`, 'concentration 0, or the role sample', field('role')))
  if (tube.role === 'sample' && tube.conc_mM === 0) problems.push(asks('sampleWithoutAgent', `Tube ${quoted(tube.label)} is a sample with concentration 0.`, 'the role blank', field('role')))
  if (tube.points.rows.length === 0) problems.push(blocks('noPoints', `Tube ${quoted(tube.label)} has no readable point.`, 'numbers in its cells and a known unit, or the tube put aside', where))
  return problems
}

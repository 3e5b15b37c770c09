import { constantConditions } from '../../shared/evidence/constantConditions'
import { formatFixed } from '../../shared/format'
import type { FigureLayer, FigureSpec } from '../../shared/schemas/figure'
import type { LigandChoiceRow } from '../../shared/schemas/ligandChoice'
import { comparable } from '../../shared/science/equilibria/comparable'
import { estimateLogK } from '../../shared/science/ligands/estimate'
import { comparableTogether } from '../../shared/science/ligands/together'
import { isPractice, type ReadLigand } from './readLigand'

type Estimate = NonNullable<LigandChoiceRow['estimate']>
/** A ligand with both numbers. */
interface Placed { ligand: ReadLigand, x: number, y: number }

/** The line of log K against ΣpKa through signed ligands of the programme, or in words why there is none. */
export interface BasicityLine {
  on: readonly Placed[]
  /** Signed, but not comparable or of common practice. */
  off: readonly Placed[]
  words: string
  at: (sumPKa: number) => Estimate | null
  /** For a ligand whose log K with the metal nobody measured; null otherwise, and where there is no line. */
  estimateFor: (ligand: ReadLigand) => Estimate | null
}

const placedOf = (ligand: ReadLigand): Placed[] =>
  ligand.basicity && ligand.constant?.value.kind === '=' ? [{ ligand, x: ligand.basicity.sum, y: ligand.constant.value.value }] : []
const conditionsOf = ({ ligand }: Placed) => constantConditions(ligand.facts.name, ligand.constant!.conditions)

export function basicityLine(ligands: readonly ReadLigand[]): BasicityLine {
  const signed = ligands.filter(one => one.entry.origin === 'programme' && one.constant?.signed).flatMap(placedOf)
  const measured = signed.filter(({ ligand }) => !isPractice(ligand.constant!))
  const { inside, warnings, outside } = comparableTogether(measured.map(conditionsOf))
  const on = inside.map(at => measured[at]!)
  const off = signed.filter(one => !on.includes(one))
  const known = on.map(({ ligand, x, y }) => ({ ligand: ligand.entry.code, sumPKa: x, logK: y }))
  const apart = outside.map(({ at, why }) => `${measured[at]!.ligand.facts.name} is not on the line: ${why}`)
  const middle = estimateLogK(known, known.length > 0 ? known.reduce((sum, one) => sum + one.sumPKa, 0) / known.length : 0)
  const at = (sumPKa: number): Estimate | null => {
    const answer = estimateLogK(known, sumPKa)
    return answer.ok ? { logK: answer.logK, low: answer.interval[0], high: answer.interval[1], warnings: [...answer.warnings] } : null
  }
  const head = middle.ok
    ? [`Straight line through ${middle.points} signed ligands: log K = ${formatFixed(middle.intercept, 2)} ${middle.slope < 0 ? '−' : '+'} ${formatFixed(Math.abs(middle.slope), 3)} × ΣpK_{a}; slope ± ${formatFixed(middle.slopeSe, 3)}, scatter of log K about the line ${formatFixed(middle.scatter, 2)}.`, ...middle.warnings]
    : [`No line is drawn. ${middle.message} Accepted: ${middle.accepted} Counted are signed values of the programme, not literature.`]
  return { on, off, words: [...head, ...warnings, ...apart].join(' '), at, estimateFor: ligand => estimateFor(ligand, at, on) }
}

function estimateFor({ entry, basicity }: ReadLigand, at: BasicityLine['at'], on: readonly Placed[]): Estimate | null {
  if (entry.constants.length > 0 || !basicity) return null
  const estimate = at(basicity.sum)
  if (!estimate) return null
  const place = comparable([...on.map(conditionsOf), basicity.conditions])
  return place.ok ? estimate : { ...estimate, warnings: [...estimate.warnings, place.message] }
}

const GRID = 48
const HOW = { on: 'signed, on the line', off: 'signed, not on the line', unsigned: 'not signed', literature: 'literature', estimate: 'estimate, not measured' } as const

/** log K against ΣpKa with line, 95 % prediction interval and estimates. Null where no ligand has both numbers. */
export function basicityFigure(ligands: readonly ReadLigand[], line: BasicityLine, ion: string): FigureSpec | null {
  const all = ligands.flatMap(placedOf)
  if (all.length === 0) return null
  const kinds = {
    on: line.on, off: line.off, literature: all.filter(({ ligand }) => ligand.entry.origin === 'literature'),
    unsigned: all.filter(({ ligand }) => ligand.entry.origin === 'programme' && !ligand.constant!.signed),
  }
  const estimates = ligands.filter(one => one.entry.origin === 'programme').flatMap((ligand) => {
    const estimate = line.estimateFor(ligand)
    return estimate ? [{ ligand, x: ligand.basicity!.sum, y: estimate.logK, low: estimate.low, high: estimate.high }] : []
  })
  const points = (of: readonly Placed[]) => of.map(({ ligand, x, y }) => ({ x, y, id: ligand.entry.key, label: ligand.facts.name }))
  const layers: FigureLayer[] = [
    ...lineLayers(line, [...line.on, ...estimates].map(one => one.x)),
    // drawn first, so that what the programme measured stands on it
    { type: 'points', name: HOW.literature, token: 's2', square: true, points: points(kinds.literature) },
    { type: 'points', name: HOW.on, token: 'ink', points: points(kinds.on) },
    { type: 'cross', name: HOW.off, token: 'ink-3', points: points(kinds.off) },
    { type: 'points', name: HOW.unsigned, token: 'ink-2', open: true, points: points(kinds.unsigned) },
    { type: 'errorBars', name: '95 % prediction interval', token: 's1', points: estimates.map(({ x, y, low, high }) => ({ x, y, low, high })) },
    { type: 'points', name: HOW.estimate, token: 's1', open: true, points: points(estimates) },
  ]
  const rows = [
    ...(['on', 'off', 'unsigned', 'literature'] as const).flatMap(kind => kinds[kind].map(one => tableRow(one, HOW[kind]))),
    ...estimates.map(one => tableRow(one, HOW.estimate, [one.low, one.high])),
  ]
  return {
    id: 'basicity', title: `log K with ${ion} against ΣpKa`, x: { label: 'ΣpK_{a}', unit: null, scale: 'linear' }, y: { label: `log K with ${ion}`, unit: null, scale: 'linear' },
    layers: layers.filter(layer => layer.type === 'note' || layer.type === 'rule' || layer.points.length > 0),
    text: `log K with ${ion} of ${all.length} ligands against the sum of their protonation constants; ${kinds.on.length} signed ones on the line, ${estimates.length} estimated from it. ${line.words}`,
    caption: `ΣpK_{a}: sum of the protonation constants recorded. ${estimates.length > 0 ? 'Open with bar: estimate with its 95 % prediction interval, never a measured value. ' : ''}Bounds stand in the table only.`,
    table: {
      columns: [
        { key: 'ligand', label: 'Ligand', unit: null, numeric: false }, { key: 'sum', label: 'ΣpK_{a}', unit: null, numeric: true }, { key: 'steps', label: 'Steps', unit: null, numeric: true }, { key: 'logK', label: 'log K', unit: null, numeric: true },
        { key: 'low', label: 'Lower end', unit: '95 %', numeric: true }, { key: 'high', label: 'Upper end', unit: '95 %', numeric: true }, { key: 'how', label: 'How', unit: null, numeric: false },
      ],
      rows,
    },
  }
}

const hundredth = (value: number | undefined): number | string => value === undefined ? 'not stated' : Math.round(value * 100) / 100

/** `ends` of an estimate; those of a measured value are its own. */
function tableRow({ ligand, x, y }: Placed, how: string, ends: readonly [number, number] | null = ligand.constant?.value.interval ?? null) {
  return { ligand: ligand.facts.name, sum: x, steps: ligand.basicity!.steps, logK: Math.round(y * 1000) / 1000, low: hundredth(ends?.[0]), high: hundredth(ends?.[1]), how }
}

/** Solid over the ligands measured, dashed beyond them; the band is for one new ligand. */
function lineLayers(line: BasicityLine, wanted: readonly number[]): FigureLayer[] {
  if (wanted.length === 0 || !line.at(wanted[0]!)) return []
  const sums = line.on.map(one => one.x)
  const [low, high, first, last] = [Math.min(...sums), Math.max(...sums), Math.min(...wanted), Math.max(...wanted)]
  const between = (from: number, to: number) => Array.from({ length: GRID + 1 }, (_, k) => from + (to - from) * k / GRID).map(x => ({ x, ...line.at(x)! }))
  const stroke = (name: string, dash: 'solid' | 'dashed', from: number, to: number): FigureLayer[] =>
    to > from ? [{ type: 'line', name, token: 'ink', dash, labelled: false, points: [from, to].map(x => ({ x, y: line.at(x)!.logK })) }] : []
  return [
    { type: 'band', name: '95 % prediction interval', token: 'ink', points: between(first, last).map(one => ({ x: one.x, low: one.low, high: one.high })) },
    ...stroke('extrapolated', 'dashed', first, low), ...stroke('line', 'solid', low, high), ...stroke('extrapolated', 'dashed', high, last),
  ]
}

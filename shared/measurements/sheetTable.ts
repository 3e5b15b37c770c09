import type { TubeSheet } from '../schemas/tubeSheet'
import { toShown } from './shownCondition'
import type { MeasurementKind } from './types'

type Cell = string | number | null

/** A tube sheet as a table to fill in: its code and the conditions above, a column per tube, an empty cell for every signal. The upload reads it back. */
export function sheetRows(sheet: TubeSheet, kind: MeasurementKind): Cell[][] {
  const x = kind.columns.find(column => column.role === 'x')
  const unit = x?.dimension === 'time' ? 'ms' : x?.dimension === 'angle' ? 'deg' : ''
  const scale = unit === 'ms' ? 1e3 : unit === 'deg' ? 180 / Math.PI : 1
  const perTube = (head: string, of: (tube: TubeSheet['tubes'][number]) => Cell): Cell[] => [head, ...sheet.tubes.map(of)]
  const numbers = sheet.tubes.some(tube => tube.concSe_mM !== null)
  return [
    ['Tube sheet', sheet.code], ['Title', sheet.title], ...kind.conditions.map(spec => [spec.label, conditionCell(spec, sheet.conditions[spec.key] ?? null)]), [],
    perTube('tube', tube => tube.label), perTube('agent', tube => tube.role === 'blank' ? 'blank' : tube.agent ?? ''), perTube('batch', tube => tube.lot ?? ''),
    perTube('conc (mM)', tube => Number(tube.conc_mM.toPrecision(6))), ...(numbers ? [perTube('conc error (mM)', tube => tube.concSe_mM === null ? '' : Number(tube.concSe_mM.toPrecision(3)))] : []),
    [`${x?.synonyms[0]?.toUpperCase() ?? 'X'}${unit ? ` (${unit})` : ''}`, ...sheet.tubes.map(tube => tube.label)],
    ...(sheet.values.length > 0 ? sheet.values : [null]).map((value): Cell[] => [value === null ? '' : Number((value * scale).toPrecision(4)), ...sheet.tubes.map(() => '')]),
  ]
}

function conditionCell(spec: MeasurementKind['conditions'][number], value: number | string | null): Cell {
  if (value === null) return ''
  if (typeof value === 'string') return spec.choices?.find(choice => choice.value === value)?.label ?? value
  return `${Number(toShown(spec, value).toPrecision(6))}${spec.shownUnit ? ` ${spec.shownUnit}` : ''}`
}

import type { CompetitorMetal } from '../../science/kinetics/rateTerms'
import { columnOf } from '../relaxation/noise'
import { asks, blocks, quoted } from '../tabular/problem'
import type { Conditions, SeriesTube, UploadProblem } from '../types'

/** What is in a flask. acid_M: strong acid; null where the table gives a pH instead. */
export interface Flask {
  readonly acid_M: number | null
  readonly pH: number | null
  readonly temperature_K: number | null
  readonly competitors_M: Readonly<Record<CompetitorMetal, number>>
  /** Acid or pH was read out of the flask's name, because nothing else says it. */
  readonly isNamed: boolean
}

const METAL_FIELDS = { Zn: 'zn_mM', Cu: 'cu_mM', Ca: 'ca_mM' } as const

const numberOr = (value: number | string | null | undefined): number | null => (typeof value === 'number' ? value : null)

/** A number of the flask: of one row, or with row null the first that the table gives; then that of all flasks. */
function given(tube: SeriesTube, conditions: Conditions, field: string, row: number | null): number | null {
  const column = columnOf(tube, field)
  const own = column === null ? null : row === null ? column.find(value => value !== null) ?? null : column[row] ?? null
  return own ?? numberOr(conditions[field])
}

const NAMED_ACID = /(?:^|\s)(\d+(?:[.,]\d+)?(?:[eE]-?\d+)?)\s*(m?)M\s*(?:HCl(?!O4)|HClO4|HNO3|H\+|acid)(?![a-z])/
const NAMED_PH = /(?:^|\s)pH\s*=?\s*(-?\d+(?:[.,]\d+)?)/

function fromName(label: string): Pick<Flask, 'acid_M' | 'pH'> {
  const words = label.replaceAll('_', ' ')
  const number = (text: string | undefined): number | null => (text === undefined ? null : Number(text.replace(',', '.')))
  const acid = NAMED_ACID.exec(words)
  const amount = number(acid?.[1])
  return { acid_M: amount === null ? null : acid?.[2] === 'm' ? amount / 1000 : amount, pH: number(NAMED_PH.exec(words)?.[1]) }
}

/** What a flask holds: from the table, else from the conditions of all flasks, and acid or pH at last from the flask's name. */
export function flaskOf(tube: SeriesTube, conditions: Conditions, row: number | null = null): Flask {
  const acid_mM = given(tube, conditions, 'acid_mM', row)
  const known = { acid_M: acid_mM === null || acid_mM === 0 ? null : acid_mM / 1000, pH: given(tube, conditions, 'pH', row) }
  const isOpen = known.acid_M === null && known.pH === null
  const named = isOpen ? fromName(tube.label) : known
  const metal = (name: CompetitorMetal): number => (given(tube, conditions, METAL_FIELDS[name], row) ?? 0) / 1000
  return {
    ...named, isNamed: isOpen && (named.acid_M !== null || named.pH !== null), temperature_K: given(tube, conditions, 'temperature_K', row),
    competitors_M: { Zn: metal('Zn'), Cu: metal('Cu'), Ca: metal('Ca') },
  }
}

/** pH that a flask stands for: of its strong acid, else as measured; null where neither is known. */
export const flaskPH = ({ acid_M, pH }: Pick<Flask, 'acid_M' | 'pH'>): number | null => (acid_M !== null ? 0 - Math.log10(acid_M) : pH)

export const hasMetal = ({ competitors_M }: Flask): boolean => Object.values(competitors_M).some(value => value > 0)

/** Acid of 0.01 M or more in which no competing metal stands: where a half-life is comparable by itself. */
export const isStrongAcid = (flask: Flask): boolean => (flaskPH(flask) ?? 14) <= 2 + 1e-9 && !hasMetal(flask)

/** °C typed as K, a flask whose acid is not known or is known twice, numbers that change within one flask. */
export function flaskProblems(tube: SeriesTube, conditions: Conditions, { mayVary, needsAcid }: { mayVary: boolean, needsAcid: boolean }): UploadProblem[] {
  const at = { field: `tubes.${tube.tubeNo}` }
  const name = `Flask ${quoted(tube.label)}`
  const rows = mayVary ? tube.points.rows.map((_, index) => index) : [null]
  const problems = mayVary ? [] : ['acid_mM', 'pH', 'zn_mM', 'cu_mM', 'ca_mM', 'temperature_K', 'end_au', 'start_au'].flatMap((field) => {
    const values = [...new Set((columnOf(tube, field) ?? []).filter(value => value !== null))]
    return values.length < 2 ? [] : [blocks('flaskVaries', `${name} has ${values[0]} and ${values[1]} under ${field}.`, 'one value for a flask; another name for another flask', at)]
  })
  for (const row of rows) {
    const flask = flaskOf(tube, conditions, row)
    const { temperature_K } = flask
    if (temperature_K !== null && !(temperature_K > 200 && temperature_K < 500)) problems.push(blocks('celsiusAsKelvin', `${name}: ${Number(temperature_K.toPrecision(5))} K: is it in °C?`, 'temperatures in K (25 °C is 298.15 K), or °C named in the head: temperature (°C)', at))
    if (needsAcid && flaskPH(flask) === null) problems.push(blocks('noAcid', `${name}: nothing says its acid or pH.`, 'a column or row of acid (M) or pH, or one of them for all flasks among the conditions', at))
    if (needsAcid && flask.isNamed) problems.push(asks('acidFromName', `${name}: ${flask.acid_M === null ? `pH ${flask.pH}` : `${flask.acid_M} M acid`} is read from its name.`, 'a column or row of acid (M) or pH, or as it is', at))
    if (flask.acid_M !== null && flask.pH !== null && Math.abs(flask.pH + Math.log10(flask.acid_M)) > 0.3) problems.push(asks('acidAndPH', `${name} has ${flask.acid_M} M acid and pH ${flask.pH}: the acid counts.`, 'one of the two, or both as they are', at))
  }
  return problems
}

import { asks, blocks, quoted } from '../tabular/problem'
import type { Conditions, SeriesTube, UploadProblem } from '../types'
import { columnOf } from './noise'

/** What a kind calls the abscissa of its signals, and what is usual there. */
export interface SignalWords {
  /** Field of the points, and stem of its column. */
  field: string
  stem: string
  label: string
  plural: string
  /** Points that give the result with an error. */
  leastPoints: number
  result: string
  /** Longest time between which nobody is asked. */
  usual_s: readonly [number, number]
  usualWords: string
  /** Magnitudes of this kind fall to a null and rise again. */
  mayDip: boolean
  /** Fields that can hold the signal. */
  signals?: readonly string[]
}

export const numbersOf = (tube: SeriesTube, field: string): number[] => (columnOf(tube, field) ?? []).flatMap(value => value ?? [])

/** Problems of the signals of one tube. */
export function signalProblems(tube: SeriesTube, conditions: Conditions, words: SignalWords): UploadProblem[] {
  const signals = (words.signals ?? ['signal_au']).flatMap(field => numbersOf(tube, field))
  if (signals.length === 0) return []
  const at = { field: `tubes.${tube.tubeNo}` }
  const name = `Tube ${quoted(tube.label)}`
  const problems: UploadProblem[] = []
  if (signals.length > 1 && signals.every(signal => signal === signals[0])) problems.push(blocks('constantSignal', `${name} has the same signal ${signals[0]} at every ${words.label}.`, `signals that change with ${words.label}, or the tube put aside`, at))
  else if (signals.length < words.leastPoints) problems.push(asks('fewPoints', `${name} has ${signals.length} points; ${words.result} with an error needs at least ${words.leastPoints}.`, `more ${words.plural}, or the tube put aside`, at))
  const isMagnitude = conditions.signalForm === 'magnitude' || conditions.signalForm === 'meanSquares'
  if (isMagnitude && signals.some(signal => signal < 0)) {
    problems.push(blocks('negativeMagnitude', `${name} has a negative signal, and the form says ${conditions.signalForm === 'magnitude' ? 'magnitude' : 'mean squares'}.`, 'signed chosen, or magnitudes in the file', { field: 'conditions.signalForm' }))
  }
  if (words.mayDip && conditions.signalForm === 'signed' && dipsInside(numbersOf(tube, words.field), signals)) {
    problems.push(asks('looksLikeMagnitude', `${name} falls and rises again without a negative signal, as magnitudes do.`, 'magnitude chosen, if that is what the file holds', { field: 'conditions.signalForm' }))
  }
  return problems
}

function dipsInside(times: readonly number[], signals: readonly number[]): boolean {
  if (signals.some(signal => signal < 0)) return false
  const inOrder = signals.map((signal, i) => ({ signal, at: times[i] ?? 0 })).sort((a, b) => a.at - b.at).map(point => point.signal)
  const lowest = Math.min(...inOrder)
  return lowest < 0.6 * (inOrder[0] ?? 0) && lowest < 0.6 * (inOrder.at(-1) ?? 0)
}

/** Seconds and milliseconds taken for each other make times that no phantom needs. */
export function timeProblems(tubes: readonly SeriesTube[], { field, stem, label, usual_s, usualWords }: SignalWords): UploadProblem[] {
  const times = tubes.flatMap(tube => numbersOf(tube, field))
  const longest = times.reduce((most, time) => Math.max(most, time), 0)
  if (times.length === 0 || (longest <= usual_s[1] && longest >= usual_s[0])) return []
  return [asks('timeUnit', `The longest ${label} is ${longest} s.`, `another unit for ${label}, if it was taken wrongly; ${usualWords}`, { field: `units.${stem}` })]
}

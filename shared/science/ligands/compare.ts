/** Ligands for one metal side by side: hints, what was measured, and what is not known. Nobody wins; every entry says why. */
import { comparable, type Comparison, type ConstantConditions } from '../equilibria/comparable'
import type { LigandFacts } from './donors'
import { hintsFor, type Hint, type Need } from './hints'
import type { Ion } from './radii'

/** A value with its kind: a bound is never read as a value, an estimate never as a measurement. */
export interface Told {
  readonly value: number
  readonly kind: '=' | '<' | '>'
  readonly basis: 'measured' | 'estimate'
}

export interface Candidate {
  readonly ligand: LigandFacts
  readonly logK: Told | null
  readonly conditions: ConstantConditions | null
  /** Half-life in acid, with the acid and temperature it belongs to in words. */
  readonly acidHalfLife_h: { readonly value: Told, readonly at: string } | null
  /** Time to 99 % formed, with its pH and temperature in words. */
  readonly formation_min: { readonly value: Told, readonly at: string } | null
}

export interface Compared {
  readonly name: string
  readonly hints: readonly Hint[]
  readonly measured: readonly string[]
  readonly unknown: readonly string[]
}

export interface LigandComparison {
  readonly entries: readonly Compared[]
  /** Whether the log K may be held against each other at all. */
  readonly constants: Comparison
  /** Pairs whose order by log K and by acid half-life disagree, in words. */
  readonly disagreements: readonly string[]
}

export function compareLigands(ion: Ion, need: Need, candidates: readonly Candidate[]): LigandComparison {
  const constants = comparable(candidates.flatMap(one => one.logK && one.conditions ? [one.conditions] : []))
  return {
    entries: candidates.map(one => ({ name: one.ligand.name, hints: hintsFor(ion, one.ligand, need), measured: measuredOf(one), unknown: unknownOf(one) })),
    constants, disagreements: constants.ok ? disagreementsOf(candidates) : [],
  }
}

const inWords = ({ value, kind, basis }: Told): string => `${kind === '=' ? '' : kind === '<' ? 'below ' : 'above '}${Number(value.toPrecision(4))}${basis === 'estimate' ? ' (estimate)' : ''}`

/** Hours, or what is read more easily below one. */
function timeInWords({ value, ...told }: Told): string {
  const [times, unit] = value >= 1 ? [1, 'h'] : value >= 1 / 60 ? [60, 'min'] : [3600, 's']
  return `${inWords({ ...told, value: value * times })} ${unit}`
}

function measuredOf({ logK, acidHalfLife_h, formation_min }: Candidate): string[] {
  return [
    ...(logK ? [`log K ${inWords(logK)}`] : []),
    ...(acidHalfLife_h ? [`half-life in acid ${timeInWords(acidHalfLife_h.value)} (${acidHalfLife_h.at})`] : []),
    ...(formation_min ? [`99 % formed after ${inWords(formation_min.value)} min (${formation_min.at})`] : []),
  ]
}

function unknownOf({ logK, acidHalfLife_h, formation_min }: Candidate): string[] {
  return [...(logK ? [] : ['log K']), ...(acidHalfLife_h ? [] : ['half-life in acid']), ...(formation_min ? [] : ['formation'])]
}

/** a above b for certain: a lower bound or value of a beyond an upper bound or value of b. */
const isAbove = (a: Told, b: Told): boolean => a.kind !== '<' && b.kind !== '>' && a.value > b.value

function disagreementsOf(candidates: readonly Candidate[]): string[] {
  const words: string[] = []
  for (const a of candidates) {
    for (const b of candidates) {
      if (!a.logK || !b.logK || !a.acidHalfLife_h || !b.acidHalfLife_h || a.acidHalfLife_h.at !== b.acidHalfLife_h.at) continue
      if (isAbove(b.logK, a.logK) && isAbove(a.acidHalfLife_h.value, b.acidHalfLife_h.value)) {
        words.push(`${a.ligand.name} holds more weakly at equilibrium than ${b.ligand.name} (log K ${inWords(a.logK)} against ${inWords(b.logK)}) but lets go more slowly in acid (${timeInWords(a.acidHalfLife_h.value)} against ${timeInWords(b.acidHalfLife_h.value)}, ${a.acidHalfLife_h.at}).`)
      }
    }
  }
  return words
}

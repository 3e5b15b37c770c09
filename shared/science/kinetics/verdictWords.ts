/** What equilibrium and kinetics say of one complex in plain words, where they disagree, and which of the two the map uses. */
import type { RateValue } from './firstOrder'

export interface StabilityFacts {
  /** pM at the stated totals, and the pM that the profile asks; null where not known. */
  readonly pM: { readonly value: number, readonly kind: '=' | '<' | '>', readonly asked: number } | null
  /** Half-life at the profile's conditions with the decades of [H+] extrapolated; null where no rate law is known. */
  readonly halfLife_s: RateValue | null
  readonly decadesExtrapolated: number | null
  /** Time the complex has to stay whole: the half-life of elimination. */
  readonly needed_s: number
}
export interface StabilityWords {
  readonly equilibrium: string
  readonly kinetics: string
  readonly together: string
  readonly disagree: boolean
  readonly mapUses: 'kinetics' | 'neither'
  readonly why: string
}

/** Loss k_d/(k_d + k_el) of 0.1 %: a thousand times the elimination half-life, within rounding. */
const SLOW_TIMES = 1000
const VERY_SLOW_TIMES = 1e5
/** A pM this far from the one asked is firm. Screening choice (common practice, no source). */
const FIRM_PM = 2

type Pace = 'very slowly' | 'slowly' | 'quickly' | null

function holdOf(facts: StabilityFacts): 'strongly' | 'just' | 'weakly' | null {
  if (facts.pM === null) return null
  const margin = facts.pM.value - facts.pM.asked
  // a bound decides only on its own side
  if (facts.pM.kind === '<' && margin >= 0) return null
  if (facts.pM.kind === '>' && margin < 0) return null
  return margin < 0 ? 'weakly' : margin < FIRM_PM || facts.pM.kind === '<' ? 'just' : 'strongly'
}

/** The pace at the unfavourable end of the interval; an upper bound of the half-life never proves slowness, nor a lower one quickness. */
function paceOf(facts: StabilityFacts): Pace {
  const half = facts.halfLife_s
  if (half === null) return null
  const times = (half.interval?.[0] ?? half.value) / facts.needed_s
  if (half.kind === '<') return half.value / facts.needed_s < SLOW_TIMES ? 'quickly' : null
  if (times >= VERY_SLOW_TIMES) return 'very slowly'
  if (times >= SLOW_TIMES) return 'slowly'
  return half.kind === '>' ? null : 'quickly'
}

/** A time in the unit that gives it one to four digits. */
export function timeWords(time_s: number): string {
  const units = [[31557600, 'y'], [86400, 'd'], [3600, 'h'], [60, 'min'], [1, 's']] as const
  const [size, name] = units.find(([size]) => time_s >= 2 * size) ?? [1, 's'] as const
  return `${Number((time_s / size).toPrecision(2))} ${name}`
}

const sign = { '=': '', '<': 'at most ', '>': 'at least ' } as const

function kineticsWords(facts: StabilityFacts, pace: Pace): string {
  if (facts.halfLife_s === null) return 'Kinetics: not known, no rate law.'
  const { value, kind } = facts.halfLife_s
  const decades = facts.decadesExtrapolated === null ? '; the measured range of pH is not stated' : facts.decadesExtrapolated > 0 ? `; extrapolated over ${facts.decadesExtrapolated.toFixed(1)} decades of acid` : ''
  return `Kinetics: ${pace === null ? 'not decided' : `lets go ${pace}`}, half-life ${sign[kind]}${timeWords(value)}${decades}.`
}

/** Both verdicts. The map stands on kinetics wherever it is known; equilibrium is beside it as a tick and a limit. */
export function stabilityWords(facts: StabilityFacts): StabilityWords {
  const hold = holdOf(facts)
  const pace = paceOf(facts)
  const pM = facts.pM
  const equilibrium = pM === null ? 'Equilibrium: not known, no constants.' : `Equilibrium: ${hold === null ? 'not decided' : `holds ${hold}`}, pM ${sign[pM.kind]}${pM.value.toFixed(1)} (${pM.asked} asked).`
  const disagree = hold !== null && pace !== null && (hold === 'weakly') !== (pace === 'quickly')
  const together = hold === null || pace === null ? 'The two cannot be compared: one of them is not known or not decided.' : `Holds ${hold} at equilibrium, lets go ${pace}.`
  return {
    equilibrium, kinetics: kineticsWords(facts, pace), together, disagree, mapUses: facts.halfLife_s === null ? 'neither' : 'kinetics',
    why: facts.halfLife_s === null
      ? 'Without a rate law the map has no fraction lost: the agent stands in a side lane.'
      : 'The map uses kinetics: what is lost before elimination is decided by how fast the complex lets go. Equilibrium stays beside it as a tick and a limit, for a long stay and for what rates alone do not show.',
  }
}

/** The two verdicts in words: what equilibrium says, what kinetics says, and whether they point different ways. */
import type { JudgedLimit, PlacedQuantity, Verdict } from './types'

export interface VerdictFacts {
  readonly pM: PlacedQuantity | null
  readonly bound_frac: PlacedQuantity | null
  readonly loss_frac: PlacedQuantity | null
  readonly limits: readonly JudgedLimit[]
}

/** A fraction as a percentage with two significant digits; tiny ones in words. */
export function percentText(fraction: number): string {
  const percent = fraction * 100
  if (percent === 0) return '0 %'
  if (percent < 1e-6) return 'less than 0.000001 %'
  if (percent > 99 && percent < 100) return `${percent.toFixed(percent > 99.99 ? 4 : 2)} %`
  return `${Number(percent.toPrecision(2)).toFixed(Math.max(0, 1 - Math.floor(Math.log10(percent))))} %`
}

const words = { '=': '', '<': 'at most ', '>': 'at least ' } as const

function equilibriumSentence(facts: VerdictFacts): string {
  const parts: string[] = []
  if (facts.bound_frac) parts.push(`${words[facts.bound_frac.kind]}${percentText(facts.bound_frac.value)} stays bound in the plasma model`)
  if (facts.pM) parts.push(`pM is ${words[facts.pM.kind]}${facts.pM.value.toFixed(1)} (${facts.limits.find(l => l.key === 'pM')?.limit ?? ''} asked)`)
  return parts.length ? `At equilibrium ${parts.join('; ')}.` : 'Equilibrium: not known, no log K with protonation constants.'
}

function kineticsSentence(facts: VerdictFacts): string {
  if (!facts.loss_frac) return 'Kinetics: not known, no rate constants.'
  const upper = facts.loss_frac.interval ? ` (upper 95 %: ${percentText(facts.loss_frac.interval[1])})` : ''
  return `Kinetics: ${words[facts.loss_frac.kind]}${percentText(facts.loss_frac.value)} lets go before it is eliminated (model)${upper}.`
}

const SUMMARIES: Readonly<Record<string, string>> = {
  'holds/holds': 'Equilibrium and kinetics both hold the metal.',
  'holds/letsGo': 'Equilibrium favours the complex, but it lets go too quickly to stay whole until it is eliminated.',
  'condemns/holds': 'At equilibrium the metal would leave; the complex does not let go in the time it has. Inertness counts first, a long stay does not help it.',
  'condemns/letsGo': 'Equilibrium and kinetics both let the metal go.',
}

/** A pM this far from the one asked is firm. Screening choice (common practice, no source). */
const FIRM_PM = 2
/** A loss this far below its limit is very slow. Screening choice (common practice, no source). */
const FIRM_LOSS = 100

function holdWords(equilibrium: Verdict['equilibrium'], facts: VerdictFacts): string | null {
  if (equilibrium === 'not known') return null
  if (equilibrium === 'condemns') return 'weakly'
  const asked = facts.limits.find(limit => limit.key === 'pM')?.limit ?? Infinity
  return facts.pM !== null && facts.pM.kind !== '<' && facts.pM.value - asked >= FIRM_PM ? 'strongly' : 'just enough'
}

function paceWords(kinetics: Verdict['kinetics'], { loss_frac, limits }: VerdictFacts): string | null {
  if (kinetics === 'not known' || loss_frac === null) return null
  if (kinetics === 'letsGo') return 'too quickly'
  const limit = limits.find(one => one.key === 'loss')?.limit ?? 0
  return (loss_frac.interval?.[1] ?? loss_frac.value) * FIRM_LOSS <= limit ? 'very slowly' : 'slowly'
}

const WHY = {
  kinetics: 'The map uses kinetics: what is lost before elimination depends on how fast the complex lets go. Equilibrium stands beside it as a tick and a limit, for a long stay and for what rates alone do not show.',
  neither: 'Without a rate law the map has no fraction lost: the agent stands in a lane at its edge, and equilibrium alone is no measure of what is lost in the time it has.',
} as const

/** Verdicts from the judged limits: pM and the bound fraction for equilibrium, the loss for kinetics. */
export function verdictOf(facts: VerdictFacts): Verdict {
  const outcome = (key: string): string => facts.limits.find(limit => limit.key === key)?.outcome ?? 'not known'
  const thermodynamic = [outcome('pM'), outcome('boundAtEquilibrium')]
  const equilibrium = thermodynamic.includes('over') ? 'condemns' : thermodynamic.includes('within') ? 'holds' : 'not known'
  const loss = outcome('loss')
  const kinetics = loss === 'over' ? 'letsGo' : loss === 'within' ? 'holds' : 'not known'
  const mapUses = facts.loss_frac ? 'kinetics' : 'neither'
  return {
    equilibrium, kinetics,
    equilibriumSentence: equilibriumSentence(facts), kineticsSentence: kineticsSentence(facts),
    disagree: (equilibrium === 'holds' && kinetics === 'letsGo') || (equilibrium === 'condemns' && kinetics === 'holds'),
    summary: SUMMARIES[`${equilibrium}/${kinetics}`] ?? 'One of the two is not known, so they cannot be compared.',
    inWords: inWords(holdWords(equilibrium, facts), paceWords(kinetics, facts)), mapUses, why: WHY[mapUses],
  }
}

function inWords(hold: string | null, pace: string | null): string {
  if (hold === null && pace === null) return 'Neither equilibrium nor kinetics is known.'
  return `${hold === null ? 'Equilibrium not known' : `Holds ${hold} at equilibrium`}, ${pace === null ? 'kinetics not known' : `lets go ${pace}`}.`
}

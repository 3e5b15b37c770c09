/** Gaps of all agents under a profile: what is missing, who could measure it, and how much of the map it would settle. */
import type { GapKey, GapRowDto } from '../schemas/gap'
import type { Seed } from '../science/placement/sampling'
import { type Narrowing, narrowings } from '../science/placement/narrowing'
import { placeAgents } from '../science/placement/place'
import type { ScreeningProfile } from '../science/placement/profile'
import type { AgentEvidence, Interval, JudgedLimit, Placement } from '../science/placement/types'

/** Draws behind the ranges of the gaps page: fewer than a decision rests on, since here they only order a list. */
export const GAP_DRAWS = 1024

/** A gap before anybody is asked to close it. */
export type OpenGap = Omit<GapRowDto, 'assignment' | 'seq'> & { complexId: string }
export interface OpenGaps { gaps: OpenGap[], placed: number, openPlaces: number }

/** Values that wait for their signature are there: what nobody measured is a gap. */
const OPTIONS = { includeUnsigned: true, draws: GAP_DRAWS }

/**
 * Every gap, those that settle most of the map first. An agent's open places are the width of its range of rank, or every place while it stands in a lane;
 * a gap's share is the places it would close, of the open places of all agents. `readiness`: what each agent's readiness list lacks. Deterministic in the seed.
 */
export function gapsUnder(agents: readonly { evidence: AgentEvidence, readiness: readonly string[] }[], profile: ScreeningProfile, seed: Seed): OpenGaps {
  const evidence = agents.map(agent => agent.evidence)
  const placements = placeAgents(evidence, profile, OPTIONS)
  const ranges = new Map(narrowings(evidence, profile, { ...OPTIONS, seed }).map(one => [one.complexId, one]))
  const placed = ranges.size
  const openPlaces = placements.reduce((sum, placement) => {
    const range = ranges.get(placement.complexId)
    return sum + (range ? widthOf(range.rank) : placement.eligibleMechanism && placement.lane !== 'plane' ? placed : 0)
  }, 0)
  const gaps = agents.flatMap(({ readiness }, i) => gapsOfAgent({ placement: placements[i]!, range: ranges.get(placements[i]!.complexId) ?? null, placed, openPlaces, readiness, profile }))
  return { gaps: gaps.sort(byUse), placed, openPlaces }
}

const widthOf = ([low, high]: Interval): number => high - low
const byUse = (one: OpenGap, other: OpenGap): number => other.places - one.places || other.limits.length - one.limits.length || Number(one.key === 'readiness') - Number(other.key === 'readiness')
  || (one.agent < other.agent ? -1 : one.agent > other.agent ? 1 : one.key < other.key ? -1 : 1)

interface AgentGaps { placement: Placement, range: Narrowing | null, placed: number, openPlaces: number, readiness: readonly string[], profile: ScreeningProfile }

function gapsOfAgent({ placement, range, placed, openPlaces, readiness, profile }: AgentGaps): OpenGap[] {
  const open = placement.limits.filter(limit => limit.outcome === 'not known')
  const gap = (key: GapKey, words: { what: string, who: string }, more: Partial<OpenGap> = {}): OpenGap => {
    const places = more.places ?? 0
    return {
      complexId: placement.complexId, agent: placement.code, mechanism: placement.mechanism, topology: placement.topology, key, ...words, rankNow: null, rankThen: null, isAtMost: false, limits: limitsOf(key, open), note: null,
      ...more, places, share_frac: openPlaces > 0 ? places / openPlaces : 0,
    }
  }
  const found = placement.missing.map(({ key, what, whoCanMeasure }) =>
    gap(key, { what, who: whoCanMeasure }, key === 'concentration' || key === 'loss' ? entryOf(placement, placed, profile) : { note: 'Moves no mark: it opens limits or a verdict only.' }))
  for (const { key, what, who } of OTHERS) if (open.some(limit => limit.key === key && limit.value === null)) found.push(gap(key, { what, who }, { note: 'Moves no mark: it opens a limit or a warning only.' }))
  const leftOut = placement.flags.find(flag => flag.id === 'competitorsLeftOut')
  const byCompetitors = leftOut ? open.filter(limit => limit.key === 'boundAtEquilibrium' && limit.value !== null) : []
  if (leftOut && byCompetitors.length > 0) found.push(gap('competitors', { what: leftOut.sentence, who: 'chemist, by titration or from the literature' }, { limits: byCompetitors.map(limit => limit.label), note: 'Moves no mark: it opens a warning only.' }))
  const bounds = open.filter(limit => limit.value !== null && !byCompetitors.includes(limit))
  if (bounds.length > 0) found.push(gap('bound', { what: `only a bound is known, which does not decide: ${bounds.map(limit => limit.label).join(', ')}`, who: 'whoever measured it, with a lower detection limit or a longer course' }, { limits: bounds.map(limit => limit.label) }))
  if (range) found.push(...sharperOf(range).map(({ key, what, then }) => gap(key, { what, who: 'chemist, with more tubes, batches or repeats, for the physicist to sign' }, { rankNow: range.rank, rankThen: then, places: widthOf(range.rank) - widthOf(then), limits: [] })))
  if (readiness.length > 0) found.push(gap('readiness', { what: `readiness: ${readiness.join(', ')}`, who: 'chemist' }, { note: 'Moves nothing on the map: it is part of the decision.' }))
  return found
}

/** What entering the plane would settle: the whole range of places, if nothing else is missing. */
function entryOf(placement: Placement, placed: number, profile: ScreeningProfile): Partial<OpenGap> {
  if (!placement.eligibleMechanism) return { note: `A ${placement.mechanism} agent has no place among the ${profile.mechanism} agents of this profile.` }
  if (placement.lane === 'neither') return { rankNow: [1, placed + 1], note: 'Settles its place only together with the other coordinate.' }
  if (placed === 0) return { note: 'The first of its kind in the plane: there is none to be ranked among yet.' }
  return { rankNow: [1, placed + 1], places: placed, isAtMost: true }
}

/** Coordinates whose error leaves the place open by at least one. */
function sharperOf({ rank, rankAtConcentration, rankAtLoss }: Narrowing): { key: GapKey, what: string, then: Interval }[] {
  return [
    { key: 'sharperConcentration' as const, what: 'working concentration: its error leaves the place open', then: rankAtConcentration },
    { key: 'sharperLoss' as const, what: 'loss: its error leaves the place open', then: rankAtLoss },
  ].filter(one => widthOf(rank) - widthOf(one.then) >= 1)
}

const OTHERS = [
  { key: 'zincPhosphate', what: 'zinc–phosphate ratio at 72 h: not measured', who: 'chemist, by relaxation rates with zinc in phosphate buffer' },
  { key: 'ratio', what: 'r2/r1: not measured at the profile\'s condition', who: 'chemist, with T2 of the same tubes' },
] as const

/** Limits that need a quantity before they can be judged. */
const NEEDS: Readonly<Record<string, readonly GapKey[]>> = {
  workingConc: ['concentration'], loss: ['loss'], unbound: ['concentration', 'loss', 'freeMetal'], freeMetal: ['freeMetal'], freeMetalWarning: ['freeMetal'], pM: ['equilibrium'], boundAtEquilibrium: ['equilibrium'],
  zincPhosphate: ['zincPhosphate'], ratio: ['ratio'],
}
const limitsOf = (key: GapKey, open: readonly JudgedLimit[]): string[] => open.filter(limit => limit.value === null && NEEDS[limit.key]?.includes(key)).map(limit => limit.label)

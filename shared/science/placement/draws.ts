/**
 * Probabilities under the stated model from seeded draws: limits met, on the front, and the range of ranks.
 */
import { drawAgent, sharedDraws, type AgentDraws } from './drawAgent'
import { logCovarianceOf, type LogCovariance } from './ellipse'
import { exactLog } from '../exactMath'
import { allFacts, placeFacts, type PlaceOptions } from './place'
import { quantileOf, type Seed } from './sampling'
import type { ScreeningProfile } from './profile'
import type { AgentEvidence, Interval, Placement } from './types'

/** Draws that a decision rests on. */
export const DRAWS = 4096

export interface DrawOptions extends PlaceOptions {
  readonly seed: Seed
  readonly draws?: number
}

/** Limits that vary from draw to draw, in the order of `limitChances`. */
export const DRAWN_LIMITS = ['workingConc', 'loss', 'unbound', 'freeMetal', 'ratio'] as const
export type DrawnLimit = (typeof DRAWN_LIMITS)[number]

export interface AgentChances {
  readonly complexId: string
  /** Share of draws in which every limit of the profile is met; null ("not known") while one has no measurement. */
  readonly meetsLimits_frac: number | null
  /** The same over the limits that have a measurement. */
  readonly meetsMeasured_frac: number | null
  readonly limitChances: Readonly<Record<DrawnLimit, number | null>>
  readonly notKnown: readonly DrawnLimit[]
  /** Share of draws in which the agent is on the front; null where it cannot take part. */
  readonly onFront_frac: number | null
  /** Median and 95 % range of the place by released metal; null outside the plane. */
  readonly rank: { readonly median: number, readonly interval: Interval } | null
  readonly workingConc_mM: Interval | null
  readonly loss_frac: Interval | null
  readonly unbound_uM: Interval | null
  /** For an ellipse that includes the shared inputs; null outside the plane. */
  readonly logCovariance: LogCovariance | null
  /** Evidence without an error: it did not vary, so the chances are too sure. */
  readonly fixed: readonly string[]
  /** Why the agent could not be drawn; null where it could. */
  readonly refused: string | null
  /** To stand beside each probability. */
  readonly decadesExtrapolated: number | null
  readonly preparations: number
}

interface Drawn {
  readonly placement: Placement
  readonly draws: AgentDraws
  readonly limits: Readonly<Record<DrawnLimit, Uint8Array | null>>
  readonly allMet: Uint8Array
}

/** Chances of every agent under a profile. Deterministic in the seed; an agent's own draws do not depend on the others. */
export function drawChances(agents: readonly AgentEvidence[], profile: ScreeningProfile, options: DrawOptions): AgentChances[] {
  const n = options.draws ?? DRAWS
  const shared = sharedDraws(profile, options.seed, n)
  const facts = allFacts(agents, profile, options)
  const placements = placeFacts(facts, profile)
  const drawn: (Drawn | { readonly placement: Placement, readonly refused: string })[] = facts.map((one, i) => {
    const draws = drawAgent(one, profile, shared)
    if (!draws.ok) return { placement: placements[i]!, refused: draws.message }
    return { placement: placements[i]!, draws, ...judgeDraws(draws, profile, placements[i]!.mechanism, n) }
  })
  // in a fixed order, so that ties fall the same way however the agents are listed
  const usable = drawn.filter((d): d is Drawn => 'draws' in d).sort((a, b) => (a.placement.complexId < b.placement.complexId ? -1 : 1))
  const fronts = countFronts(usable.filter(d => canTakePart(d.placement)), n)
  const ranks = rankDraws(usable.filter(d => d.placement.eligibleMechanism && d.placement.lane === 'plane'), n)
  return drawn.map(d => ('draws' in d
    ? summarise(d, { n, front: fronts.get(d.placement.complexId) ?? null, ranks: ranks.get(d.placement.complexId) ?? null })
    : refusedChances(d.placement, d.refused)))
}

/** Like taking part in the front as drawn, but without the limits: those are judged anew in each draw. */
function canTakePart(p: Placement): boolean {
  return p.eligibleMechanism && p.lane === 'plane' && p.signed && p.split.length === 0 && p.loss_frac?.kind !== '>' && p.workingConc_mM?.kind !== '>'
}

function judgeDraws(draws: AgentDraws, profile: ScreeningProfile, mechanism: Placement['mechanism'], n: number): Pick<Drawn, 'limits' | 'allMet'> {
  const met = (values: Float64Array | null, limit: number): Uint8Array | null => {
    if (values === null) return null
    const flags = new Uint8Array(n)
    for (let d = 0; d < n; d++) flags[d] = values[d]! <= limit ? 1 : 0
    return flags
  }
  const limits = {
    workingConc: met(draws.workingConc_mM, profile.limitWorkingConc_mM), loss: met(draws.loss_frac, profile.limitLoss_frac),
    unbound: met(draws.unbound_uM, profile.limitUnbound_uM), freeMetal: met(draws.freeMetal_frac, profile.limitFreeMetal_frac),
    ratio: mechanism === 'T1' ? met(draws.ratioR2R1, profile.limitRatioR2R1) : new Uint8Array(n).fill(1),
  }
  const allMet = new Uint8Array(n).fill(1)
  for (const one of Object.values(limits)) if (one) for (let d = 0; d < n; d++) allMet[d]! &= one[d]!
  return { limits, allMet }
}

/** How often each agent is unbeaten among those that meet every measured limit in the same draw. */
function countFronts(drawn: readonly Drawn[], n: number): Map<string, number> {
  const counts = new Uint32Array(drawn.length)
  const order = drawn.map((_, i) => i)
  for (let d = 0; d < n; d++) {
    const loss = (i: number): number => drawn[i]!.draws.loss_frac![d]!
    const conc = (i: number): number => drawn[i]!.draws.workingConc_mM![d]!
    order.sort((a, b) => loss(a) - loss(b) || conc(a) - conc(b))
    let lowest = Infinity
    let previous = -1
    for (const i of order) {
      if (!drawn[i]!.allMet[d]) continue
      const same = previous >= 0 && loss(i) === loss(previous) && conc(i) === conc(previous)
      if (conc(i) < lowest || same) {
        counts[i]!++
        lowest = conc(i)
        previous = i
      }
    }
  }
  return new Map(drawn.map((d, i) => [d.placement.complexId, counts[i]! / n]))
}

/** Place of each agent by released metal in every draw, 1 = least. */
function rankDraws(drawn: readonly Drawn[], n: number): Map<string, Float64Array> {
  const ranks = drawn.map(() => new Float64Array(n))
  const order = drawn.map((_, i) => i)
  const released = new Float64Array(drawn.length)
  for (let d = 0; d < n; d++) {
    drawn.forEach((one, i) => { released[i] = one.draws.loss_frac![d]! * one.draws.workingConc_mM![d]! })
    order.sort((a, b) => released[a]! - released[b]! || a - b)
    order.forEach((i, place) => { ranks[i]![d] = place + 1 })
  }
  return new Map(drawn.map((d, i) => [d.placement.complexId, ranks[i]!]))
}

const share = (met: Uint8Array): number => met.reduce((sum, x) => sum + x, 0) / met.length

function rangeOf(values: Float64Array | null): Interval | null {
  if (values === null) return null
  const sorted = Float64Array.from(values).sort()
  return [quantileOf(sorted, 0.025), quantileOf(sorted, 0.975)]
}

function summarise(drawn: Drawn, of: { n: number, front: number | null, ranks: Float64Array | null }): AgentChances {
  const { placement, draws, limits, allMet } = drawn
  const notKnown = DRAWN_LIMITS.filter(key => limits[key] === null)
  const chances = Object.fromEntries(DRAWN_LIMITS.map(key => [key, limits[key] && share(limits[key])])) as Record<DrawnLimit, number | null>
  const sortedRanks = of.ranks && Float64Array.from(of.ranks).sort()
  return {
    complexId: placement.complexId,
    meetsLimits_frac: notKnown.length ? null : share(allMet), meetsMeasured_frac: share(allMet), limitChances: chances, notKnown,
    onFront_frac: of.front,
    rank: sortedRanks && { median: quantileOf(sortedRanks, 0.5), interval: [quantileOf(sortedRanks, 0.025), quantileOf(sortedRanks, 0.975)] },
    workingConc_mM: rangeOf(draws.workingConc_mM), loss_frac: rangeOf(draws.loss_frac), unbound_uM: rangeOf(draws.unbound_uM),
    logCovariance: draws.loss_frac && draws.workingConc_mM && logCovarianceOf(draws.loss_frac.map(exactLog), draws.workingConc_mM.map(exactLog)),
    fixed: draws.fixed, refused: null, decadesExtrapolated: placement.decadesExtrapolated, preparations: placement.preparations,
  }
}

function refusedChances(placement: Placement, refused: string): AgentChances {
  return {
    complexId: placement.complexId, meetsLimits_frac: null, meetsMeasured_frac: null, limitChances: { workingConc: null, loss: null, unbound: null, freeMetal: null, ratio: null },
    notKnown: DRAWN_LIMITS, onFront_frac: null, rank: null, workingConc_mM: null, loss_frac: null, unbound_uM: null, logCovariance: null, fixed: [], refused,
    decadesExtrapolated: placement.decadesExtrapolated, preparations: placement.preparations,
  }
}

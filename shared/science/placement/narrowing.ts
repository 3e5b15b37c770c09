/** How far a sharper measurement would narrow an agent's place: the range of its rank as drawn, and with one of the two quantities behind its coordinates held at its median. */
import { drawAgent, drawLoss, sharedDraws } from './drawAgent'
import { allFacts, placeFacts } from './place'
import { quantileOf } from './sampling'
import { DRAWS, type DrawOptions } from './draws'
import type { ScreeningProfile } from './profile'
import type { AgentEvidence, Interval } from './types'

export interface Narrowing {
  readonly complexId: string
  /** 95 % range of the place by released metal, 1 = least. */
  readonly rank: Interval
  /** The same with this agent's working concentration at the median of its draws, all else as drawn. */
  readonly rankAtConcentration: Interval
  /** The same with this agent's dissociation rate at the median of its draws; the residence stays drawn, since all agents share it. */
  readonly rankAtLoss: Interval
}

/**
 * Ranges of rank of every agent in the plane, of the profile's mechanism. Holding a quantity at its median stands for measuring it without error; where the
 * true value lies elsewhere the range moves, so the width is an expectation, not a promise. Deterministic in the seed; the draws are those of `drawChances`.
 * An agent whose draws are refused takes no part, as there.
 */
export function narrowings(agents: readonly AgentEvidence[], profile: ScreeningProfile, options: DrawOptions): Narrowing[] {
  const n = options.draws ?? DRAWS
  const shared = sharedDraws(profile, options.seed, n)
  const facts = allFacts(agents, profile, options)
  const placements = placeFacts(facts, profile)
  const placed = facts.flatMap((one, i) => {
    if (!placements[i]!.eligibleMechanism || placements[i]!.lane !== 'plane') return []
    const draws = drawAgent(one, profile, shared)
    if (!draws.ok) return []
    const [conc, loss] = [draws.workingConc_mM!, draws.loss_frac!]
    return [{ complexId: one.agent.complexId, conc, loss, concMedian: medianOf(conc), lossHeld: drawLoss(new Float64Array(n).fill(medianOf(draws.kd_per_s!)), profile, shared), ranks: [new Float64Array(n), new Float64Array(n), new Float64Array(n)] as const }]
  })
  const released = new Float64Array(placed.length)
  for (let d = 0; d < n; d++) {
    placed.forEach((one, i) => { released[i] = one.conc[d]! * one.loss[d]! })
    const sorted = Float64Array.from(released).sort()
    placed.forEach(({ conc, loss, concMedian, lossHeld, ranks }, i) => {
      ranks[0][d] = placeAmong(sorted, released[i]!, released[i]!)
      ranks[1][d] = placeAmong(sorted, released[i]!, concMedian * loss[d]!)
      ranks[2][d] = placeAmong(sorted, released[i]!, conc[d]! * lossHeld[d]!)
    })
  }
  return placed.map(({ complexId, ranks }) => ({ complexId, rank: rangeOf(ranks[0]), rankAtConcentration: rangeOf(ranks[1]), rankAtLoss: rangeOf(ranks[2]) }))
}

/** Place of `value` among the others: `own` is the agent's entry in `sorted` and does not count against it. */
function placeAmong(sorted: Float64Array, own: number, value: number): number {
  let low = 0
  let high = sorted.length
  while (low < high) {
    const middle = (low + high) >>> 1
    if (sorted[middle]! < value) low = middle + 1
    else high = middle
  }
  return 1 + low - (own < value ? 1 : 0)
}

const medianOf = (values: Float64Array): number => quantileOf(Float64Array.from(values).sort(), 0.5)
function rangeOf(ranks: Float64Array): Interval {
  const sorted = Float64Array.from(ranks).sort()
  return [quantileOf(sorted, 0.025), quantileOf(sorted, 0.975)]
}

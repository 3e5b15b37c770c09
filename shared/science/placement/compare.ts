/** What depends on the other agents: front, ranks, and pairs that cannot be told apart. */
import { findFront, pairsNotDistinguishable, type FrontPoint } from './front'
import { logSpreadOf } from './read'
import type { PlacedQuantity, Placement } from './types'

/** An agent takes part in the front when it is signed, of the profile's mechanism, in the plane, within limits, undisputed and not known only from below. */
export function takesPart(p: Placement): boolean {
  return p.eligibleMechanism && p.lane === 'plane' && p.signed && p.withinLimits && p.split.length === 0
    && p.loss_frac?.kind !== '>' && p.workingConc_mM?.kind !== '>'
}

function frontPoint(p: Placement): FrontPoint {
  const [loss, conc] = [p.loss_frac!, p.workingConc_mM!]
  const worst = (q: PlacedQuantity): number => (q.kind === '=' ? q.interval?.[1] ?? q.value : q.value)
  const best = (q: PlacedQuantity): number => (q.kind === '<' ? 0 : q.value)
  return {
    id: p.complexId, loss_frac: loss.value, conc_mM: conc.value,
    worst: { loss_frac: worst(loss), conc_mM: worst(conc) }, best: { loss_frac: best(loss), conc_mM: best(conc) },
  }
}

/** Front, ranks and pairs that cannot be told apart: what depends on the other agents. */
export function compareAgents(placements: readonly Placement[]): Placement[] {
  const { front, solid } = findFront(placements.filter(takesPart).map(frontPoint))
  const onFront = new Set(front)
  const inPlane = placements.filter(p => p.eligibleMechanism && p.lane === 'plane')
  const released = (p: Placement): number => p.loss_frac!.value * p.workingConc_mM!.value
  const order = [...inPlane].sort((a, b) => released(a) - released(b) || (a.complexId < b.complexId ? -1 : 1))
  const ranks = new Map(order.map((p, i) => [p.complexId, i + 1]))
  const spread = (q: PlacedQuantity): number | null => (q.kind === '=' ? logSpreadOf(q) : Infinity)
  const pairs = pairsNotDistinguishable(inPlane.map(p => ({
    id: p.complexId, lnLoss: Math.log(p.loss_frac!.value), lnConc: Math.log(p.workingConc_mM!.value), lossSpread: spread(p.loss_frac!), concSpread: spread(p.workingConc_mM!),
  })))
  return placements.map(p => ({
    ...p, onFront: onFront.has(p.complexId), frontSolid: solid.has(p.complexId),
    rank: ranks.get(p.complexId) ?? null, notDistinguishable: pairs.get(p.complexId) ?? [],
  }))
}

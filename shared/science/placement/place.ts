/**
 * Where every agent stands under a profile. Without draws, so that a change of the profile moves the marks at once;
 * probabilities come from draws.ts.
 */
import { createPlacementCache } from './cache'
import { compareAgents } from './compare'
import { ellipseOf } from './ellipse'
import { agentFacts, type AgentFacts, type PlaceOptions } from './facts'
import { residenceOf } from './kinetic'
import { judgeLimits, withinAll } from './limits'
import { lossLogSpread } from './loss'
import { factOf, logSpreadOf, placedFrom, preparationsOf } from './read'
import { timesConcentration, unboundFraction, unboundTotal } from './unbound'
import { verdictOf } from './verdict'
import type { ScreeningProfile } from './profile'
import type { AgentEvidence, BoundArrow, Lane, PlacedQuantity, Placement, PlacementFlag } from './types'

export type { PlaceOptions } from './facts'

/** Places all agents: lanes, bounds, ellipses, limits, front and ranks. */
export function placeAgents(agents: readonly AgentEvidence[], profile: ScreeningProfile, options: PlaceOptions): Placement[] {
  return placeFacts(allFacts(agents, profile, options), profile)
}

/** Facts of all agents, with one cache for them all. */
export function allFacts(agents: readonly AgentEvidence[], profile: ScreeningProfile, options: PlaceOptions): AgentFacts[] {
  const shared = { includeUnsigned: options.includeUnsigned, cache: options.cache ?? createPlacementCache() }
  return agents.map(agent => agentFacts(agent, profile, shared))
}

/** Placements from facts that were read already. */
export function placeFacts(facts: readonly AgentFacts[], profile: ScreeningProfile): Placement[] {
  return compareAgents(facts.map(one => placeOne(one, profile)))
}

function placeOne(facts: AgentFacts, profile: ScreeningProfile): Placement {
  const { agent, working, kinetic, equilibrium, records } = facts
  const conc = working?.quantity ?? null
  const loss = kinetic?.loss_frac ?? null
  const freeMetal = placedFrom(facts.freeMetal, 'Free metal in the batch')
  const unbound = unboundTotal(loss, freeMetal)
  const unbound_uM = unbound && conc && timesConcentration(unbound, conc, { factor: 1000, unit: 'µM', label: 'Unbound metal at the working concentration' })
  const limitFacts = {
    workingConc_mM: conc, loss_frac: loss, unbound_uM, freeMetal_frac: freeMetal, pM: equilibrium.pM, zincPhosphateRatio: records.zincPhosphateRatio,
    boundAtEquilibrium_frac: equilibrium.bound_frac, ratioR2R1: facts.ratio,
  }
  const limits = judgeLimits(limitFacts, profile, agent.mechanism)
  const signed = facts.used.length > 0 && facts.used.every(item => item.signed)
  const ellipses = ellipsesOf(facts, profile)
  return {
    complexId: agent.complexId, code: agent.code, mechanism: agent.mechanism, topology: agent.topology,
    lane: laneOf(conc, loss), missing: facts.missing, eligibleMechanism: agent.mechanism === profile.mechanism,
    workingConc_mM: conc, split: working?.split ?? [], kd_per_s: kinetic?.kd_per_s ?? null, halfLife_s: kinetic?.halfLife_s ?? null, loss_frac: loss,
    freeMetal_frac: freeMetal, unboundTotal_frac: unbound, unbound_uM,
    unbound_umol_per_kg: unbound && conc && timesConcentration(unbound, conc, { factor: 1000 * profile.distributionVolume_L_per_kg, unit: 'µmol/kg', label: 'Unbound metal by body mass' }),
    ratioR2R1: facts.ratio, pM: equilibrium.pM, zincPhosphateRatio: records.zincPhosphateRatio, acidHalfLife_s: records.acidHalfLife_s, boundAtEquilibrium_frac: equilibrium.bound_frac,
    arrows: arrowsOf(conc, loss), ...ellipses,
    stem: loss && freeMetal && { fromLoss_frac: loss.value, toUnbound_frac: unboundFraction(freeMetal.value, loss.value), toIsBound: freeMetal.kind !== '=' || loss.kind !== '=' },
    tick: equilibrium.bound_frac && { bound_frac: equilibrium.bound_frac.value, kind: equilibrium.bound_frac.kind },
    limits, withinLimits: withinAll(limits), onFront: false, frontSolid: false, notDistinguishable: [], rank: null,
    decadesExtrapolated: kinetic?.rate.decadesExtrapolated ?? null, preparations: preparationsOf(working?.pooled.items ?? []),
    flags: flagsOf(facts, profile), signed,
    verdict: verdictOf({ pM: equilibrium.pM, bound_frac: equilibrium.bound_frac, loss_frac: loss, limits }),
    evidenceIds: facts.used.map(item => item.id),
  }
}

function laneOf(conc: PlacedQuantity | null, loss: PlacedQuantity | null): Lane {
  if (conc && loss) return 'plane'
  if (conc) return 'lossMissing'
  return loss ? 'concentrationMissing' : 'neither'
}

function arrowsOf(conc: PlacedQuantity | null, loss: PlacedQuantity | null): BoundArrow[] {
  const arrow = (axis: BoundArrow['axis'], quantity: PlacedQuantity | null): BoundArrow[] =>
    quantity === null || quantity.kind === '=' ? [] : [{ axis, towards: quantity.kind === '<' ? 'lower' : 'higher' }]
  return [...arrow('loss', loss), ...arrow('concentration', conc)]
}

function ellipsesOf({ working, kinetic }: AgentFacts, profile: ScreeningProfile): Pick<Placement, 'ellipse68' | 'ellipse95'> {
  const none = { ellipse68: null, ellipse95: null }
  if (!working || !kinetic || working.quantity.kind !== '=' || kinetic.rate.kind !== '=' || working.split.length) return none
  const spreads = [lossLogSpread(kinetic.rate, residenceOf(profile)), logSpreadOf(working.quantity)]
  if (spreads[0] === null || spreads[1] === null) return none
  const covariance = { lossLoss: spreads[0]! ** 2, concConc: spreads[1]! ** 2, lossConc: 0 }
  const centre = { loss_frac: kinetic.loss_frac.value, conc_mM: working.quantity.value }
  return { ellipse68: ellipseOf(centre, covariance, 0.68), ellipse95: ellipseOf(centre, covariance, 0.95) }
}

function flagsOf({ working, kinetic, equilibrium, used }: AgentFacts, profile: ScreeningProfile): PlacementFlag[] {
  const flags: PlacementFlag[] = [...(kinetic?.flags ?? []), ...equilibrium.flags]
  if (working && working.split.length) flags.push({ id: 'seriesDisagree', sentence: `${working.split.length} series at this condition disagree (p below 0.01): each is drawn, none is on the front.` })
  if (working && !working.pHStated) flags.push({ id: 'noConditions', sentence: 'The pH of a series is not stated.' })
  const preparations = preparationsOf(working?.pooled.items ?? [])
  if (working && preparations < profile.batchesToAdvance) flags.push({ id: 'onePreparation', sentence: `${preparations} of ${profile.batchesToAdvance} independent batches measured.` })
  flags.push(...outsideMeasured(working))
  if (used.some(item => !item.signed)) flags.push({ id: 'unsignedUsed', sentence: 'Rests on values that are not signed.' })
  return flags
}

/** p of the quadratic term below which a line counts as bent: then a slope holds only where it was measured. */
const BENT_P = 0.05

function outsideMeasured(working: AgentFacts['working']): PlacementFlag[] {
  if (!working) return []
  const conc = working.quantity.value
  const outside = working.pooled.items.find((item) => {
    const [low, high, bent] = ['lowestConc_mM', 'highestConc_mM', 'quadraticP'].map(key => factOf(item, key))
    return bent !== null && bent! < BENT_P && low !== null && high !== null && !(conc >= low! && conc <= high!)
  })
  if (!outside) return []
  return [{ id: 'outsideMeasured', sentence: `The working concentration, ${Number(conc.toPrecision(3))} mM, lies outside the ${factOf(outside, 'lowestConc_mM')} to ${factOf(outside, 'highestConc_mM')} mM that were measured, and that line is bent: measure there.` }]
}

/**
 * Where every agent stands under a profile. Without draws, so that a change of the profile moves the marks at once;
 * probabilities come from draws.ts.
 */
import { combineBounds } from '../kinetics/rateLaw'
import { logInterval } from '../kinetics/firstOrder'
import { ellipseOf } from './ellipse'
import { equilibriumPlacement, recordQuantities, type EquilibriumPlacement, type PlasmaCache } from './equilibrium'
import { findFront, pairsNotDistinguishable, type FrontPoint } from './front'
import { kineticPlacement, residenceOf, type KineticPlacement } from './kinetic'
import { judgeLimits, withinAll } from './limits'
import { lossLogSpread } from './loss'
import { itemsOf, logSpreadOf, newestOf, placedFrom, preparationsOf } from './read'
import { unboundFraction } from './unbound'
import { verdictOf } from './verdict'
import { relaxivityRatio, workingConcentration, type WorkingConcentration } from './working'
import type { ScreeningProfile } from './profile'
import type { AgentEvidence, BoundArrow, EvidenceItem, Lane, MissingItem, PlacedQuantity, Placement, PlacementFlag } from './types'

export interface PlaceOptions {
  /** Show agents that rest on unsigned values; such agents never take part in the front. */
  readonly includeUnsigned: boolean
  /** Kept by the caller from one profile change to the next: plasma equilibria are the slow part. */
  readonly cache?: PlasmaCache
}

/** Everything known of one agent before it is compared with others. */
export interface AgentFacts {
  readonly agent: AgentEvidence
  readonly working: WorkingConcentration | null
  readonly kinetic: KineticPlacement | null
  readonly equilibrium: EquilibriumPlacement
  readonly freeMetal: EvidenceItem | null
  readonly missing: readonly MissingItem[]
  readonly used: readonly EvidenceItem[]
  readonly ratio: PlacedQuantity | null
  readonly records: ReturnType<typeof recordQuantities>
}

/** Reads one agent's evidence under a profile. */
export function agentFacts(agent: AgentEvidence, profile: ScreeningProfile, options: PlaceOptions): AgentFacts {
  const { includeUnsigned } = options
  const working = workingConcentration(agent, profile, includeUnsigned)
  const kinetic = kineticPlacement(agent, profile, includeUnsigned)
  const equilibrium = equilibriumPlacement(agent, profile, { includeUnsigned, cache: options.cache ?? new Map() })
  const records = recordQuantities(agent, includeUnsigned)
  const freeMetal = newestOf(itemsOf(agent.evidence, 'freeMetal_frac', includeUnsigned))
  const ratio = relaxivityRatio(agent, profile, includeUnsigned)
  const missing: MissingItem[] = []
  if (!working.ok) missing.push(working.missing)
  if (!kinetic.ok) missing.push({ key: 'loss', what: lossMissing(kinetic.message, records), whoCanMeasure: 'chemist, with time courses in acid and with zinc or copper, for the physicist to sign' })
  if (freeMetal === null) missing.push({ key: 'freeMetal', what: 'free metal in the batch: not measured', whoCanMeasure: 'chemist, by colorimetry with its detection limit' })
  if (equilibrium.pM === null && equilibrium.bound_frac === null) missing.push({ key: 'equilibrium', what: 'log K with protonation constants: not known', whoCanMeasure: 'chemist, by titration or from the literature' })
  const used = [
    ...(working.ok ? working.working.pooled.items : []), ...(kinetic.ok ? kinetic.kinetic.items : []), ...equilibrium.items, ...records.items,
    ...(ratio ? ratio.items : []), ...(freeMetal ? [freeMetal] : []),
  ]
  return {
    agent, working: working.ok ? working.working : null, kinetic: kinetic.ok ? kinetic.kinetic : null, equilibrium, freeMetal, missing, records,
    used: [...new Map(used.map(item => [item.id, item])).values()],
    ratio: ratio && {
      value: ratio.value, kind: '=', se: ratio.se, interval: ratio.se === null ? null : logInterval(ratio.value, ratio.se), unit: '',
      evidenceIds: ratio.items.map(item => item.id), label: 'r2/r1', carried: false,
    },
  }
}

function lossMissing(message: string, records: AgentFacts['records']): string {
  const known = [records.acidHalfLife_s && 'a half-life in acid', records.zincPhosphateRatio && 'a zinc–phosphate ratio'].filter(Boolean)
  return known.length ? `rate constants: ${message}; only ${known.join(' and ')} is there, which gives no loss` : `rate constants: ${message}`
}

/** Places all agents: lanes, bounds, ellipses, limits, front and ranks. */
export function placeAgents(agents: readonly AgentEvidence[], profile: ScreeningProfile, options: PlaceOptions): Placement[] {
  const shared = { ...options, cache: options.cache ?? new Map() }
  return compare(agents.map(agent => placeOne(agentFacts(agent, profile, shared), profile)))
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

/**
 * f_free + (1 − f_free)·loss. A free-metal fraction that was never measured is not zero: the loss alone then says "at least",
 * and nothing at all where the loss is itself only "at most".
 */
function unboundTotal(loss: PlacedQuantity | null, free: PlacedQuantity | null): PlacedQuantity | null {
  if (loss === null) return null
  const base = { unit: '', label: 'Unbound metal', carried: loss.carried, evidenceIds: [...loss.evidenceIds, ...(free?.evidenceIds ?? [])] }
  if (free === null) return loss.kind === '<' ? null : { ...base, value: loss.value, kind: '>', se: null, interval: null }
  const released = (1 - free.value) * loss.value
  const part = (kind: '=' | '<' | '>'): number => (free.kind === kind ? free.value : 0) + (loss.kind === kind ? released : 0)
  const errors = [free.kind === '=' ? free.se : 0, loss.kind === '=' ? loss.se : 0]
  const se = errors.some(e => e === null) ? null : Math.sqrt(((1 - loss.value) * errors[0]!) ** 2 + ((1 - free.value) * errors[1]!) ** 2)
  return { ...base, ...combineBounds({ exact: part('='), below: part('<'), above: part('>'), se }) }
}

function timesConcentration(fraction: PlacedQuantity, conc: PlacedQuantity, as: { factor: number, unit: string, label: string }): PlacedQuantity | null {
  const kinds = new Set([fraction.kind, conc.kind].filter(kind => kind !== '='))
  if (kinds.size > 1) return null
  const value = fraction.value * conc.value * as.factor
  const se = fraction.se === null || conc.se === null ? null : value * Math.sqrt((fraction.se / fraction.value) ** 2 + (conc.se / conc.value) ** 2)
  return {
    value, kind: [...kinds][0] ?? '=', se, interval: se === null ? null : logInterval(value, se), unit: as.unit, label: as.label,
    evidenceIds: [...new Set([...conc.evidenceIds, ...fraction.evidenceIds])], carried: fraction.carried || conc.carried,
  }
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
  if (used.some(item => !item.signed)) flags.push({ id: 'unsignedUsed', sentence: 'Rests on values that are not signed.' })
  return flags
}

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
function compare(placements: readonly Placement[]): Placement[] {
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

/** Draws of one agent: working concentration, loss and unbound metal, with the profile's uncertain inputs shared by all agents. */
import { exactExp, exactLog } from '../exactMath'
import { drawRate, type DrawsRefused } from './drawRate'
import { rateConditionsOf } from './kinetic'
import { lossFraction, type Residence } from './loss'
import { above, below, logNormal, normals, splitLogNormal, type Seed } from './sampling'
import type { AgentFacts } from './facts'
import type { ScreeningProfile } from './profile'
import type { PlacedQuantity } from './types'

/** Inputs that are drawn once and shared by every agent. */
export interface SharedDraws {
  readonly seed: Seed
  readonly draws: number
  readonly slowShare_frac: Float64Array
  readonly slowHalfLife_s: Float64Array
  /** Deviates of a covariance group's common factor. */
  readonly scaleOf: (groupId: string) => Float64Array
}

/** Draws of the profile's slow compartment; a range that is a point, or a share of 0, does not vary. */
export function sharedDraws(profile: ScreeningProfile, seed: Seed, draws: number): SharedDraws {
  const range = (name: string, value: number, low: number, high: number): Float64Array => {
    if (!(low > 0) || !(low < high)) return new Float64Array(draws).fill(value)
    return splitLogNormal(value, low, high, normals(seed, ['profile', name], draws))
  }
  const scales = new Map<string, Float64Array>()
  const share = profile.slowShare_frac > 0 ? range('slowShare', profile.slowShare_frac, profile.slowShareLow_frac, profile.slowShareHigh_frac) : new Float64Array(draws)
  return {
    seed, draws,
    // a share of the dose stays below 1, however wide its range
    slowShare_frac: share.map(x => (x < 0.99 ? x : 0.99)),
    slowHalfLife_s: range('slowHalfLife', profile.slowHalfLife_s, profile.slowHalfLifeLow_s, profile.slowHalfLifeHigh_s),
    scaleOf: (groupId) => {
      const known = scales.get(groupId) ?? normals(seed, ['scale', groupId], draws)
      scales.set(groupId, known)
      return known
    },
  }
}

export interface AgentDraws {
  readonly ok: true
  readonly complexId: string
  readonly workingConc_mM: Float64Array | null
  /** Dissociation rate before the profile's residence turns it into a loss. */
  readonly kd_per_s: Float64Array | null
  readonly loss_frac: Float64Array | null
  readonly freeMetal_frac: Float64Array | null
  readonly unbound_uM: Float64Array | null
  readonly ratioR2R1: Float64Array | null
  /** Evidence without an error, which does not vary in the draws. */
  readonly fixed: readonly string[]
}

/** All draws of one agent; refused where the stated correlations cannot hold. */
export function drawAgent(facts: AgentFacts, profile: ScreeningProfile, shared: SharedDraws): AgentDraws | DrawsRefused {
  const fixed: string[] = []
  const conc = facts.working && drawConcentration(facts, shared, fixed)
  let kd: Float64Array | null = null
  let loss: Float64Array | null = null
  if (facts.kinetic) {
    const { law, items } = facts.kinetic
    const group = (law.sharedScale_frac ?? 0) > 0 ? items[0]?.covarianceGroup?.id : undefined
    const rate = drawRate(law, rateConditionsOf(profile), { seed: shared.seed, draws: shared.draws, scale: group === undefined ? null : shared.scaleOf(group) })
    if (!rate.ok) return rate
    fixed.push(...rate.fixed)
    kd = rate.kd_per_s
    loss = drawLoss(kd, profile, shared)
  }
  const free = drawQuantity(facts.freeMetal, shared, fixed)
  return {
    ok: true, complexId: facts.agent.complexId, workingConc_mM: conc, kd_per_s: kd, loss_frac: loss, freeMetal_frac: free,
    unbound_uM: conc && loss && free && conc.map((c, d) => 1000 * c * (free[d]! + (1 - free[d]!) * loss![d]!)),
    ratioR2R1: facts.ratio && drawPlaced(facts.ratio, shared),
    fixed,
  }
}

/** Loss in each draw, with the residence that all agents share. */
export function drawLoss(kd_per_s: Float64Array, profile: ScreeningProfile, shared: SharedDraws): Float64Array {
  return kd_per_s.map((kd, d) => {
    const residence: Residence = { eliminationHalfLife_s: profile.eliminationHalfLife_s, slowShare_frac: shared.slowShare_frac[d]!, slowHalfLife_s: shared.slowHalfLife_s[d]! }
    return lossFraction(kd, residence)
  })
}

function drawConcentration({ working }: AgentFacts, shared: SharedDraws, fixed: string[]): Float64Array {
  const { pooled, power, quantity } = working!
  const ids = pooled.items.map(item => item.id)
  const z = normals(shared.seed, ['pooled', ...[...ids].sort()], shared.draws)
  if (quantity.kind === '<') return below(quantity.value, z)
  if (quantity.kind === '>') return above(quantity.value, z)
  const spreadOf = (relative: number): number => Math.sqrt(exactLog(1 + relative * relative))
  if (pooled.ownRelative === null) fixed.push(...ids)
  const own = pooled.ownRelative === null ? 0 : spreadOf(pooled.ownRelative)
  const parts = pooled.scales.map(part => ({ spread: spreadOf(part.relative), z: shared.scaleOf(part.groupId) }))
  return z.map((x, d) => {
    let shift = own * x
    for (const part of parts) shift += part.spread * part.z[d]!
    return quantity.value * exactExp(power * shift)
  })
}

function drawQuantity(item: AgentFacts['freeMetal'], shared: SharedDraws, fixed: string[]): Float64Array | null {
  if (item === null) return null
  const z = normals(shared.seed, ['item', item.id], shared.draws)
  if (item.kind === '<') return below(item.value, z)
  // a fraction ends at 1
  if (item.kind === '>') return above(item.value, z).map(x => (x < 1 ? x : 1))
  if (item.se !== null && item.value > 0) return logNormal(item.value, item.se, z).map(x => (x < 1 ? x : 1))
  fixed.push(item.id)
  return new Float64Array(shared.draws).fill(item.value)
}

function drawPlaced(quantity: PlacedQuantity, shared: SharedDraws): Float64Array {
  const z = normals(shared.seed, ['ratio', ...quantity.evidenceIds], shared.draws)
  return quantity.se === null ? z.map(() => quantity.value) : logNormal(quantity.value, quantity.se, z)
}

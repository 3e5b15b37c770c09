/** Everything known of one agent under a profile, before it is compared with others. */
import { logInterval } from '../kinetics/firstOrder'
import { cachedIndex, type PlacementCache } from './cache'
import { equilibriumPlacement, recordQuantities, type EquilibriumPlacement } from './equilibrium'
import { kineticPlacement, type KineticPlacement } from './kinetic'
import { itemsOf, newestOf } from './read'
import { relaxivityRatio, workingConcentration, type WorkingConcentration } from './working'
import type { ScreeningProfile } from './profile'
import type { AgentEvidence, EvidenceItem, MissingItem, PlacedQuantity } from './types'

export interface PlaceOptions {
  /** Show agents that rest on unsigned values; such agents never take part in the front. */
  readonly includeUnsigned: boolean
  /** Kept by the caller from one profile change to the next; without it everything is worked out anew. */
  readonly cache?: PlacementCache
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
export function agentFacts(agent: AgentEvidence, profile: ScreeningProfile, options: Required<PlaceOptions>): AgentFacts {
  const index = cachedIndex(options.cache, agent, options.includeUnsigned)
  const working = workingConcentration(index, agent.mechanism, profile)
  const kinetic = kineticPlacement(index, profile)
  const equilibrium = equilibriumPlacement(index, profile, options.cache)
  const records = recordQuantities(index)
  const freeMetal = newestOf(itemsOf(index, 'freeMetal_frac'))
  const ratio = relaxivityRatio(index, profile)
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

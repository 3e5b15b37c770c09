import type { AgentEvidence, CovarianceGroup, EvidenceItem, Mechanism, Topology } from '../science/placement/types'
import { currentEvidence, type EvidenceItemDto } from './item'

export interface AgentIdentity { complexId: string, code: string, mechanism: Mechanism, topology: Topology }

/** Constants with competing metals are kept under names of their own; the placement reads them as log K with its metal. */
const AS_LOG_K = new Set(['logKCa', 'logKMg', 'logKZn', 'logKCu'])

/**
 * Evidence of one agent as the placement reads it: of each chain the version that counts, details as parameters, and the correlation of constants that came
 * from one fit.
 */
export function toAgentEvidence(agent: AgentIdentity, items: readonly EvidenceItemDto[]): AgentEvidence {
  const current = currentEvidence(items).filter(item => item.complexId === agent.complexId)
  return { complexId: agent.complexId, code: agent.code, mechanism: agent.mechanism, topology: agent.topology, evidence: current.map(item => toPlacementItem(item, current)) }
}

function toPlacementItem(item: EvidenceItemDto, all: readonly EvidenceItemDto[]): EvidenceItem {
  const { value } = item
  return {
    id: item.id, quantity: AS_LOG_K.has(item.quantity) ? 'logK' : item.quantity, value: value.value, kind: value.kind, se: value.se, interval: value.interval, unit: value.unit,
    conditions: item.conditions, signed: item.signed, batchId: item.batchId, covarianceGroup: groupOf(item, all),
    parameters: item.detail,
  }
}

/** A record that states the correlation of k0 and k1 states it for its own two items. */
function groupOf(item: EvidenceItemDto, all: readonly EvidenceItemDto[]): CovarianceGroup | null {
  const r = item.detail.correlation_k0_k1
  const partner = { k0_per_s: 'k1_per_M_s', k1_per_M_s: 'k0_per_s' }[item.quantity]
  const other = typeof r === 'number' && partner ? all.find(one => one.origin.id === item.origin.id && one.quantity === partner) : undefined
  if (!other || typeof r !== 'number') return item.covarianceGroup
  return { ...(item.covarianceGroup ?? { id: item.origin.id, scaleFraction: 0 }), correlation: { [other.id]: r } }
}

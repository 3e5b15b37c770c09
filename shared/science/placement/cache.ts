/**
 * What need not be worked out again when only the profile changes. Kept by the caller from one placement to the next; agents are
 * recognised by identity, so evidence that changed must come in a new object.
 */
import { indexEvidence, type EvidenceIndex } from './read'
import type { BoundInPlasma, BoundRefused, PlasmaBackground } from '../equilibria/boundInPlasma'
import type { LigandFacts } from './equilibrium'
import type { AgentEvidence } from './types'

export interface PlacementCache {
  readonly signedOnly: WeakMap<AgentEvidence, EvidenceIndex>
  readonly withUnsigned: WeakMap<AgentEvidence, EvidenceIndex>
  readonly ligands: WeakMap<EvidenceIndex, LigandFacts | 'none'>
  /** Plasma equilibria by constants and conditions: the slow part. */
  readonly plasma: Map<string, BoundInPlasma | BoundRefused>
  /** The plasma model without an agent, by conditions. */
  readonly backgrounds: Map<string, PlasmaBackground | BoundRefused>
}

export function createPlacementCache(): PlacementCache {
  return { signedOnly: new WeakMap(), withUnsigned: new WeakMap(), ligands: new WeakMap(), plasma: new Map(), backgrounds: new Map() }
}

export function cachedIndex(cache: PlacementCache, agent: AgentEvidence, includeUnsigned: boolean): EvidenceIndex {
  const shelf = includeUnsigned ? cache.withUnsigned : cache.signedOnly
  const index = shelf.get(agent) ?? indexEvidence(agent.evidence, includeUnsigned)
  shelf.set(agent, index)
  return index
}

import { defineStore } from 'pinia'
import { toAgentEvidence } from '#shared/evidence/agentEvidence'
import type { EvidenceItemDto } from '#shared/evidence/item'
import type { MapAgentDto, MapDto } from '#shared/schemas/map'
import { createPlacementCache } from '#shared/science/placement/cache'
import type { AgentChances } from '#shared/science/placement/draws'
import { placeAgents } from '#shared/science/placement/place'
import type { AgentEvidence, Mechanism, Placement } from '#shared/science/placement/types'

export const MOST_SHORTLISTED = 6
export const SHOWN = ['ring', 'openChain', 'T1', 'T2', 'CEST', 'signed'] as const
export type Shown = (typeof SHOWN)[number]

/**
 * What the map shows: agents of a programme placed under the profile, worked out here so that a change of the profile moves the marks at once.
 * The chances come from draws and follow a moment later.
 */
export const useMapStore = defineStore('map', () => {
  const profile = useProfileStore()
  const programme = ref<string | null>(null)
  const agents = shallowRef<readonly MapAgentDto[]>([])
  const seed = ref('')
  const includesUnsigned = ref(true)
  const hidden = ref<Shown[]>([])
  const chosenId = ref<string | null>(null)
  const shortlist = ref<string[]>([])
  const chances = shallowRef<ReadonlyMap<string, AgentChances>>(new Map())
  /** Chances belong to an earlier profile and are being drawn again. */
  const areChancesOld = ref(true)
  const cache = createPlacementCache()

  /** The same objects as long as the evidence is the same: the cache recognises them by identity. */
  const evidence = computed<AgentEvidence[]>(() => agents.value.map(agent => toAgentEvidence(agent, agent.evidence)))
  const placements = computed<Placement[]>(() => placeAgents(evidence.value, profile.usable, { includeUnsigned: includesUnsigned.value, cache }))
  const byId = computed(() => new Map(placements.value.map(one => [one.complexId, one])))
  const agentById = computed(() => new Map(agents.value.map(one => [one.complexId, one])))
  const shown = computed(() => placements.value.filter(one => isShown(one, hidden.value)))
  const chosen = computed(() => (chosenId.value ? byId.value.get(chosenId.value) : undefined) ?? null)
  const shortlisted = computed(() => shortlist.value.flatMap(id => byId.value.get(id) ?? []))
  const mechanisms = computed<Mechanism[]>(() => (['T1', 'T2', 'CEST'] as const).filter(one => agents.value.some(agent => agent.mechanism === one)))

  function accept(dto: MapDto, programmeCode: string): void {
    if (programme.value !== programmeCode) forget()
    programme.value = programmeCode
    agents.value = dto.agents
    seed.value = dto.seed
    profile.accept(dto.profiles)
    const known = new Set(dto.agents.map(one => one.complexId))
    shortlist.value = shortlist.value.filter(id => known.has(id))
    if (chosenId.value && !known.has(chosenId.value)) chosenId.value = null
    chosenId.value ??= placements.value.find(one => one.onFront)?.complexId ?? null
  }
  function forget(): void {
    chosenId.value = null
    shortlist.value = []
    chances.value = new Map()
  }
  /** @returns false when the shortlist is full */
  function toggleShortlist(id: string): boolean {
    if (shortlist.value.includes(id)) shortlist.value = shortlist.value.filter(one => one !== id)
    else if (shortlist.value.length >= MOST_SHORTLISTED) return false
    else shortlist.value = [...shortlist.value, id]
    return true
  }
  function toggleShown(key: Shown): void {
    hidden.value = hidden.value.includes(key) ? hidden.value.filter(one => one !== key) : [...hidden.value, key]
  }
  const itemsBehind = (ids: readonly string[]): EvidenceItemDto[] => agents.value.flatMap(agent => agent.evidence.filter(item => ids.includes(item.id)))

  return {
    agents, seed, includesUnsigned, hidden, chosenId, shortlist, chances, areChancesOld, evidence, placements, byId, agentById, shown, chosen, shortlisted, mechanisms, cache: () => cache,
    accept, toggleShortlist, toggleShown, itemsBehind,
  }
})

function isShown(placement: Placement, hidden: readonly Shown[]): boolean {
  return !hidden.includes(placement.topology) && !hidden.includes(placement.mechanism) && !(placement.signed && hidden.includes('signed'))
}

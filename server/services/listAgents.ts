import type { EvidenceItemDto } from '../../shared/evidence/item'
import { formatCelsius, formatNumber } from '../../shared/format'
import { groupBy } from '../../shared/groupBy'
import type { Scope } from '../../shared/permissions'
import type { AgentListDto, AgentRowDto, StatedQuantity } from '../../shared/schemas/agent'
import { placeAgents } from '../../shared/science/placement/place'
import type { Placement } from '../../shared/science/placement/types'
import type { Deps } from '../platform/deps'
import { listBatches } from '../queries/batches'
import { agentDecisions, countSeries, type AgentDecisionRow } from '../queries/complexes'
import { gapsOf, readAgents, stated, type AgentView } from './agentView'
import { screeningProfile } from './screeningProfile'

/** Agents of a programme with the values that place them under its profile, and what is missing. */
export async function listAgents(deps: Pick<Deps, 'db'>, { programmeId, scope }: { programmeId: string, scope: Scope }): Promise<AgentListDto> {
  const { db } = deps
  const [agents, { profile, name }, batches, series, decisions] = await Promise.all([
    readAgents(db, programmeId, scope), screeningProfile(db, programmeId), listBatches(db, programmeId), countSeries(db, programmeId), agentDecisions(db, programmeId),
  ])
  const placements = new Map(placeAgents(agents.map(agent => agent.placement), profile, { includeUnsigned: scope !== 'signed' }).map(one => [one.complexId, one]))
  const lots = groupBy(batches, batch => batch.complexId)
  return {
    profileName: name,
    agents: agents.map(agent => toRow(agent, placements.get(agent.row.id)!, {
      batches: lots.get(agent.row.id)?.length ?? 0, series: series.get(agent.row.id) ?? 0, decision: decisions.find(one => one.complexId === agent.row.id), scope,
    })),
  }
}

interface Beside { batches: number, series: number, decision: AgentDecisionRow | undefined, scope: Scope }

function toRow({ row, payload, ligand, evidence }: AgentView, placement: Placement, { batches, series, decision, scope }: Beside): AgentRowDto {
  const relaxivity = relaxivityOf(payload.mechanism, evidence, placement)
  return {
    id: row.id, code: row.code, metal: payload.metal, mechanism: payload.mechanism, topology: ligand.topology, ligand: row.ligandCode, ligandName: ligand.name, charge: payload.charge, batches, series,
    registeredAt: row.at.toISOString(),
    relaxivity: relaxivity.value, relaxivityConditions: relaxivity.conditions,
    pM: stated(placement.pM, evidence), kd: stated(placement.kd_per_s, evidence), halfLife: stated(placement.halfLife_s, evidence), freeMetal: stated(placement.freeMetal_frac, evidence),
    signed: isAllSigned(placement, evidence),
    decision: decision ? { outcome: decision.outcome, at: decision.at.toISOString(), by: decision.personName } : null,
    gaps: scope === 'signed' ? null : gapsOf(placement.missing),
  }
}

/** Signed as a whole: something is known, and everything that places the agent is signed. */
export function isAllSigned(placement: Placement, evidence: readonly EvidenceItemDto[]): boolean {
  return evidence.length > 0 && placement.signed
}

/** The relaxivity that the profile uses; where none fits its condition, the newest of another condition, said so. */
function relaxivityOf(mechanism: string, evidence: readonly EvidenceItemDto[], placement: Placement): { value: StatedQuantity | null, conditions: string | null } {
  if (mechanism === 'CEST') return { value: null, conditions: null }
  const quantity = mechanism === 'T2' ? 'r2_per_mM_s' : 'r1_per_mM_s'
  const all = evidence.filter(item => item.quantity === quantity)
  const used = all.find(item => placement.workingConc_mM?.evidenceIds.includes(item.id))
  const item = used ?? all.at(-1)
  if (!item) return { value: null, conditions: null }
  return { value: { value: item.value, state: item.checkState, note: used ? null : 'not at the profile\'s condition' }, conditions: conditionWords(item) }
}

/** "3 T, 37 °C, plasma" */
function conditionWords({ conditions }: EvidenceItemDto): string {
  const { b0_T, temperature_K, medium } = conditions
  return [typeof b0_T === 'number' ? `${formatNumber(b0_T)} T` : '', typeof temperature_K === 'number' ? formatCelsius(temperature_K, 0) : '', typeof medium === 'string' ? medium : ''].filter(Boolean).join(', ')
}

import type { Knex } from 'knex'
import { toAgentEvidence } from '../../shared/evidence/agentEvidence'
import { currentEvidence, type EvidenceItemDto } from '../../shared/evidence/item'
import { groupBy } from '../../shared/groupBy'
import type { Scope } from '../../shared/permissions'
import { ComplexPayload, type GapDto, type StatedQuantity } from '../../shared/schemas/agent'
import { LigandPayload } from '../../shared/schemas/ligand'
import type { AgentEvidence, MissingItem, PlacedQuantity } from '../../shared/science/placement/types'
import { listComplexRows, type ComplexRow } from '../queries/complexes'
import { readEvidence } from '../queries/evidence'
import { readVersions, type VersionRow } from '../queries/versions'

/** An agent with the newest of what is known of it. */
export interface AgentView { row: ComplexRow, payload: ComplexPayload, ligand: LigandPayload, evidence: EvidenceItemDto[], placement: AgentEvidence }

const newestByParent = (rows: readonly VersionRow[]): Map<string, VersionRow> => {
  const newest = new Map<string, VersionRow>()
  for (const row of rows) if ((newest.get(row.parentId)?.versionNo ?? 0) < row.versionNo) newest.set(row.parentId, row)
  return newest
}

/** Every agent of a programme with its current evidence. Those who see signed values only see the agents that have one. */
export async function readAgents(db: Knex, programmeId: string, scope: Scope): Promise<AgentView[]> {
  const [rows, complexVersions, ligandVersions, items] = await Promise.all([
    listComplexRows(db, programmeId), readVersions(db, 'complex', programmeId), readVersions(db, 'ligand', programmeId), readEvidence(db, programmeId, scope),
  ])
  const complexes = newestByParent(complexVersions)
  const ligands = newestByParent(ligandVersions)
  const current = groupBy(currentEvidence(items), item => item.complexId)
  return rows.filter(row => scope !== 'signed' || current.has(row.id)).map((row) => {
    const payload = ComplexPayload.parse(complexes.get(row.id)!.payload)
    const ligand = LigandPayload.parse(ligands.get(row.ligandId)!.payload)
    const evidence = current.get(row.id) ?? []
    return { row, payload, ligand, evidence, placement: toAgentEvidence({ complexId: row.id, code: row.code, mechanism: payload.mechanism, topology: ligand.topology }, evidence) }
  })
}

/** A derived number for a screen, with the state of the least certain value behind it. Null stays null: not measured is not zero. */
export function stated(placed: PlacedQuantity | null, evidence: readonly EvidenceItemDto[], note: string | null = null): StatedQuantity | null {
  if (!placed || !Number.isFinite(placed.value)) return null
  const behind = evidence.filter(item => placed.evidenceIds.includes(item.id))
  const weakest = behind.find(item => item.checkState !== 'signed')
  const interval = placed.interval && placed.interval.every(Number.isFinite) ? [placed.interval[0], placed.interval[1]] as [number, number] : null
  return {
    value: { value: placed.value, kind: placed.kind, se: placed.se !== null && Number.isFinite(placed.se) ? placed.se : null, interval, unit: placed.unit, evidenceId: placed.evidenceIds[0] ?? null },
    state: weakest?.checkState ?? 'signed', note,
  }
}

const WHY: Readonly<Record<MissingItem['key'], string>> = {
  concentration: 'puts the agent on the map', loss: 'puts the agent on the map', freeMetal: 'needed for the limits on free and unbound metal', equilibrium: 'needed for pM and the equilibrium verdict',
}

export const gapsOf = (missing: readonly MissingItem[]): GapDto[] => missing.map(({ key, what, whoCanMeasure }) => ({ what, who: whoCanMeasure, why: WHY[key] }))

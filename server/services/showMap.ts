import type { Scope } from '../../shared/permissions'
import type { MapDto } from '../../shared/schemas/map'
import type { ProfileVersionDto } from '../../shared/schemas/profile'
import type { Deps } from '../platform/deps'
import { listBatches } from '../queries/batches'
import { agentDecisions } from '../queries/complexes'
import { listProfileVersions, type ProfileVersionRow } from '../queries/profiles'
import { readAgents } from './agentView'

/** Seed of every draw on a programme's map and of the snapshots taken from it: the same for everyone, so that two people read the same probabilities. */
export const mapSeed = (programmeId: string): string => `map:${programmeId}`

/** Everything the map computes from: agents with the evidence that counts, their standing decisions, and the saved profiles. */
export async function showMap(deps: Pick<Deps, 'db'>, { programmeId, scope }: { programmeId: string, scope: Scope }): Promise<MapDto> {
  const [agents, batches, decisions, profiles] = await Promise.all([
    readAgents(deps.db, programmeId, scope), listBatches(deps.db, programmeId), agentDecisions(deps.db, programmeId), listProfileVersions(deps.db, programmeId),
  ])
  return {
    seed: mapSeed(programmeId),
    profiles: profiles.map(profileDto),
    agents: agents.map(({ row, payload, ligand, evidence }) => {
      const decision = decisions.find(one => one.complexId === row.id)
      return {
        complexId: row.id, code: row.code, metal: payload.metal, ligand: ligand.name, q: payload.q, mechanism: payload.mechanism, topology: ligand.topology, evidence,
        batches: batches.filter(batch => batch.complexId === row.id).map(batch => ({ id: batch.id, lot: batch.lot })),
        decision: decision ? { id: decision.id, outcome: decision.outcome, at: decision.at.toISOString(), by: decision.personName } : null,
      }
    }),
  }
}

export function profileDto(row: ProfileVersionRow): ProfileVersionDto {
  return { id: row.id, profileId: row.profileId, name: row.name, versionNo: row.versionNo, payload: row.payload, note: row.note, by: row.personName, at: row.at.toISOString() }
}

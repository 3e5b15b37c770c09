import type { Knex } from 'knex'
import { gapsUnder, type OpenGaps } from '../../shared/map/gaps'
import { readinessGaps } from '../../shared/readiness'
import { listBatches } from '../queries/batches'
import { agentDecisions } from '../queries/complexes'
import { currentReadiness } from '../queries/readiness'
import { readAgents } from './agentView'
import { screeningProfile } from './screeningProfile'
import { mapSeed } from './showMap'

/** Every gap of every agent that was not stopped, under the profile in use, named in `profile`. */
export async function openGaps(db: Knex, programmeId: string): Promise<OpenGaps & { profile: string }> {
  const [agents, { profile, name }, decisions, lists, batches] = await Promise.all([
    readAgents(db, programmeId, 'programme'), screeningProfile(db, programmeId), agentDecisions(db, programmeId), currentReadiness(db, programmeId), listBatches(db, programmeId),
  ])
  const going = agents.filter(agent => decisions.find(one => one.complexId === agent.row.id)?.outcome !== 'stop').map(({ row, placement }) => ({
    evidence: placement, readiness: readinessGaps(lists.find(one => one.complexId === row.id)?.payload ?? null, batches.filter(batch => batch.complexId === row.id).length),
  }))
  return { ...gapsUnder(going, profile, mapSeed(programmeId)), profile: name }
}

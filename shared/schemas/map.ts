import { z } from 'zod'
import { EvidenceItemDto } from '../evidence/item'
import { MECHANISMS } from './agent'
import { TOPOLOGIES } from './ligand'
import { ProfileVersionDto } from './profile'

export const MapAgentDto = z.object({
  complexId: z.string(), code: z.string(), metal: z.string(), ligand: z.string(), q: z.number().nullable(), mechanism: z.enum(MECHANISMS), topology: z.enum(TOPOLOGIES),
  evidence: z.array(EvidenceItemDto),
  batches: z.array(z.object({ id: z.string(), lot: z.string() })),
  decision: z.object({ id: z.string(), outcome: z.enum(['advance', 'hold', 'stop']), at: z.string(), by: z.string() }).nullable(),
})
export type MapAgentDto = z.output<typeof MapAgentDto>

/** Everything the map computes from; where the marks stand is worked out in the browser, so that a change of the profile moves them at once. */
export const MapDto = z.object({
  agents: z.array(MapAgentDto),
  /** Newest version first; empty while no lead saved one. */
  profiles: z.array(ProfileVersionDto),
  /** For the draws: the same seed gives the same numbers to everyone. */
  seed: z.string(),
})
export type MapDto = z.output<typeof MapDto>

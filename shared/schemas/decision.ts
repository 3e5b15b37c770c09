import { z } from 'zod'
import type { EvidenceItemDto } from '../evidence/item'
import type { AgentChances } from '../science/placement/draws'
import type { Placement } from '../science/placement/types'
import type { ScreeningProfile } from '../science/placement/profile'
import { codeOf, oneOf } from './accepted'
import { MECHANISMS } from './agent'
import { TOPOLOGIES } from './ligand'
import type { FrozenReadiness } from './readiness'

export const OUTCOMES = ['advance', 'hold', 'stop'] as const
export const MIN_REASONS_LENGTH = 20

export const RecordDecisionInput = z.strictObject({
  agent: codeOf('The agent'),
  profileVersionId: z.uuid({ error: 'The profile version is missing. Accepted: a saved version of a profile.' }),
  outcome: oneOf('The decision', OUTCOMES),
  reasons: z.string({ error: 'The reasons are missing.' }).trim()
    .min(MIN_REASONS_LENGTH, { error: `The reasons stay for good. Accepted: at least ${MIN_REASONS_LENGTH} characters.` }).max(8000, { error: 'The reasons are too long. Accepted: at most 8000 characters.' }),
  /** The decision this one replaces, as the person saw it; null = they saw none. */
  supersedes: z.uuid().nullable(),
})
export type RecordDecisionInput = z.output<typeof RecordDecisionInput>
export const DecisionStored = z.object({ id: z.string() })

/** What stood behind a decision at its moment: frozen with it and never computed again. */
export interface DecisionSnapshot {
  takenAt: string
  profile: { versionId: string, name: string, versionNo: number, payload: ScreeningProfile }
  agent: { complexId: string, code: string }
  placement: Placement
  chances: AgentChances
  evidence: EvidenceItemDto[]
  signatures: { subjectKind: string, subjectId: string, personName: string, at: string }[]
  /** Codes on the front among signed agents of the profile's mechanism. */
  front: string[]
  seed: string
  engine: { lanthorn: string, node: string, v8: string }
  /** The readiness list as it stood; absent from decisions older than the list, and not given to those who see signed values only. */
  readiness?: FrozenReadiness
  /** The person who decides signed some of it: the decision says so. */
  deciderSigned: boolean
}

export const NoticeDto = z.object({
  id: z.string(), cause: z.string(), at: z.string(),
  changes: z.array(z.object({ what: z.string(), was: z.string(), now: z.string() })),
  by: z.string().nullable(),
  acknowledged: z.object({ by: z.string(), at: z.string(), note: z.string() }).nullable(),
})
export type NoticeDto = z.output<typeof NoticeDto>

export const DecisionRowDto = z.object({
  id: z.string(), agent: z.string(), mechanism: z.enum(MECHANISMS), topology: z.enum(TOPOLOGIES), outcome: z.enum(OUTCOMES), reasons: z.string(), by: z.string(), at: z.string(),
  profile: z.string(), supersedes: z.string().nullable(), supersededBy: z.string().nullable(),
  /** Notices that nobody has acknowledged; always 0 for those who see signed values only. */
  groundMoved: z.number().int(),
})
export type DecisionRowDto = z.output<typeof DecisionRowDto>
export const DecisionListDto = z.object({ decisions: z.array(DecisionRowDto) })
export type DecisionListDto = z.output<typeof DecisionListDto>

export const DecisionDto = DecisionRowDto.extend({
  snapshot: z.custom<DecisionSnapshot>(), snapshotHash: z.string(), notices: z.array(NoticeDto),
  history: z.array(z.object({ id: z.string(), outcome: z.enum(OUTCOMES), by: z.string(), at: z.string() })),
})
export type DecisionDto = z.output<typeof DecisionDto>

export const AcknowledgeInput = z.strictObject({ note: z.string().trim().min(10, { error: 'Say what was made of it. Accepted: at least 10 characters.' }).max(1000) })

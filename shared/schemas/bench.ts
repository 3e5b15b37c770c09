import { z } from 'zod'
import { AgentRowDto } from './agent'
import { CheckSubjectDto, QueueItemDto } from './check'
import { BenchTaskDto } from './gap'
import { ProgressJob } from './progress'

/** `mine`: the person who asks entered it. */
const Own = CheckSubjectDto.extend({ mine: z.boolean() })

export const ReturnedDto = Own.extend({ comment: z.string(), by: z.string(), at: z.string() })
export type ReturnedDto = z.output<typeof ReturnedDto>
/** Not sent yet, taken back, or a signature was withdrawn. `refusal`: a fit that gave no number, and why. */
export const UnsentDto = Own.extend({ refusal: z.string().nullable() })
export type UnsentDto = z.output<typeof UnsentDto>
/** A fit on its way, or one that stopped. */
export const BenchFitDto = z.object({ seriesId: z.string(), agentCode: z.string(), lot: z.string(), title: z.string(), mechanism: z.string().nullable(), topology: z.string().nullable(), job: ProgressJob })
export type BenchFitDto = z.output<typeof BenchFitDto>

export const BenchDto = z.object({
  returned: z.array(ReturnedDto),
  unsent: z.array(UnsentDto),
  /** What the person sent and nobody has answered yet. */
  sent: z.array(Own),
  fits: z.array(BenchFitDto),
  staged: z.array(z.object({ id: z.string(), fileName: z.string(), bytes: z.number(), stagedAt: z.string(), expiresAt: z.string() })),
  /** The queue, for whoever may sign; null for others. */
  queue: z.array(QueueItemDto).nullable(),
  /** Decisions whose ground has moved and that nobody has looked at since. */
  ground: z.array(z.object({ decisionId: z.string(), agentCode: z.string(), at: z.string(), changes: z.array(z.object({ what: z.string(), was: z.string(), now: z.string() })) })),
  /** Gaps that the person is asked to close, the one due first ahead. */
  tasks: z.array(BenchTaskDto),
  agents: z.array(AgentRowDto),
})
export type BenchDto = z.output<typeof BenchDto>

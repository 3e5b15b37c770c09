import { z } from 'zod'

export const ProgressQuery = z.object({ poll: z.literal('1').optional() })

/** A job in words of the screen. waiting = queued, or pausing before the next try. */
export const ProgressJob = z.object({
  jobId: z.string(),
  kind: z.string(),
  seriesId: z.string().nullable(),
  state: z.enum(['queued', 'running', 'done', 'parked', 'cancelled']),
  /** 0 to 1; null = not known. */
  fraction: z.number().nullable(),
  attempts: z.number(),
  maxAttempts: z.number(),
  /** Why the last try failed, in a line; null = it did not. */
  error: z.string().nullable(),
  finishedAt: z.string().nullable(),
})
export type ProgressJob = z.output<typeof ProgressJob>

export const ProgressDto = z.object({ at: z.string(), jobs: z.array(ProgressJob) })
export type ProgressDto = z.output<typeof ProgressDto>

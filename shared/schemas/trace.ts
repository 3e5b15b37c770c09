import { z } from 'zod'
import { Quantity } from '../evidence/quantity'

/** One step of "where from?": value, fit or record, series, tubes, file, engine. */
export const TraceStep = z.object({
  id: z.enum(['value', 'fit', 'record', 'batch', 'check', 'series', 'tubes', 'file', 'source', 'engine']),
  title: z.string(),
  lines: z.array(z.string()),
  /** Page that shows it; null where there is none or it is not open to the person who asks. */
  href: z.string().nullable(),
  sha256: z.string().nullable(),
  /** Lit: a person put their name to it. */
  lit: z.boolean(),
})
export type TraceStep = z.output<typeof TraceStep>

export const TraceDto = z.object({
  evidenceId: z.string(),
  quantity: z.string(),
  agentCode: z.string(),
  value: Quantity,
  steps: z.array(TraceStep),
  /** The fit that can be computed again to prove the number; null where there is none, or it is not open to the person who asks. */
  repeat: z.object({ seriesId: z.string(), versionNo: z.number() }).nullable(),
})
export type TraceDto = z.output<typeof TraceDto>

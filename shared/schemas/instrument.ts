import { z } from 'zod'
import { FigureSpec } from './figure'

export const InstrumentListDto = z.object({
  instruments: z.array(z.object({
    id: z.string(), name: z.string(), b0_T: z.number(), referenceLabel: z.string().nullable(), sessions: z.number(), lastSession: z.string().nullable(), isOutside: z.boolean().nullable(),
  })),
})
export type InstrumentListDto = z.output<typeof InstrumentListDto>

export const ReferenceSessionDto = z.object({
  /** File of the session; its series share one reading. */
  uploadId: z.string(), seriesId: z.string(), title: z.string(), agentCode: z.string(), on: z.string(), value: z.number(), se: z.number().nullable(), isBase: z.boolean(),
  /** Distance from the mean of the base sessions in their SD; null while there are too few. */
  z: z.number().nullable(), isOutside: z.boolean(),
})
export const ControlChartDto = z.object({
  quantity: z.string(), label: z.string(), unit: z.string(), kindTitle: z.string(), temperature_K: z.number().nullable(), centre: z.number().nullable(), sd: z.number().nullable(), baseCount: z.number(),
  sessions: z.array(ReferenceSessionDto), figure: FigureSpec.nullable(), note: z.string(),
})
export type ControlChartDto = z.output<typeof ControlChartDto>

export const InstrumentDto = z.object({
  id: z.string(), name: z.string(), b0_T: z.number(),
  reference: z.object({ label: z.string(), contents: z.string(), since: z.string(), reason: z.string(), by: z.string(), at: z.string() }).nullable(),
  history: z.array(z.object({ label: z.string(), contents: z.string(), since: z.string(), reason: z.string(), by: z.string(), at: z.string() })),
  charts: z.array(ControlChartDto),
})
export type InstrumentDto = z.output<typeof InstrumentDto>

export const InstrumentParams = z.object({ programme: z.string(), id: z.uuid() })
export const NameReference = z.strictObject({
  label: z.string().trim().min(1, 'The name of the tube is needed, as it stands in the files.').max(120),
  contents: z.string().trim().min(1, 'What the tube holds is needed.').max(200),
  /** Day from which it counts: sessions before it belong to the tube before. */
  since: z.iso.date('A day such as 2026-12-01 is needed.'),
  reason: z.string().trim().min(10, 'A reason stays with the instrument for good; at least 10 characters.').max(1000),
  expectedSeq: z.number().int().min(0),
})
export type NameReference = z.output<typeof NameReference>

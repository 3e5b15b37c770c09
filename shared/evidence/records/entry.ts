import { z } from 'zod'

/** What a person typed into one field, with the unit they typed it in. Absent or null = not given, which is never zero. */
export const RecordValue = z.discriminatedUnion('type', [
  z.strictObject({ type: z.literal('quantity'), kind: z.enum(['=', '<', '>']), value: z.number(), se: z.number().nullable().default(null), unit: z.string() }),
  z.strictObject({ type: z.literal('number'), value: z.number(), unit: z.string() }),
  z.strictObject({ type: z.literal('steps'), steps: z.array(z.strictObject({ value: z.number(), se: z.number().nullable().default(null) })).max(20) }),
  z.strictObject({ type: z.literal('choice'), choice: z.string() }),
  z.strictObject({ type: z.literal('text'), text: z.string() }),
])
export type RecordValue = z.output<typeof RecordValue>
export const RecordEntry = z.record(z.string(), RecordValue)
export type RecordEntry = z.output<typeof RecordEntry>

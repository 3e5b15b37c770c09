import { z } from 'zod'

export const FindQuery = z.object({ q: z.string().trim().min(1, 'Type what to look for.').max(80, 'At most 80 characters.') })

export const FindDto = z.object({
  agents: z.array(z.object({ code: z.string(), ligand: z.string() })),
  series: z.array(z.object({ id: z.string(), agentCode: z.string(), lot: z.string(), title: z.string(), /** null where the person may not see files. */ fileName: z.string().nullable() })),
  records: z.array(z.object({ id: z.string(), agentCode: z.string(), title: z.string(), citation: z.string() })),
  /** More was found than is listed. */
  more: z.boolean(),
})
export type FindDto = z.output<typeof FindDto>

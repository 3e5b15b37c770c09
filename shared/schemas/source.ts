import { z } from 'zod'
import { lineOf, lineOrNull, oneOf } from './accepted'

export const SOURCE_ORIGINS = ['paper', 'memory', 'own'] as const
export const ORIGIN_WORDS: Readonly<Record<(typeof SOURCE_ORIGINS)[number], string>> = { paper: 'read in the publication', memory: 'from memory', own: 'our own measurement' }

export const SourceInput = z.strictObject({
  citation: lineOf('The source', 500),
  doi: lineOrNull('The DOI', 200).refine(text => text === null || /^10\.\d{4,9}\/\S+$/.test(text), { error: 'The DOI cannot be read. Accepted: a text such as 10.1000/182, or nothing.' }),
  origin: oneOf('Where the values were taken from', SOURCE_ORIGINS, Object.values(ORIGIN_WORDS)),
  note: lineOrNull('The note on the source', 1000),
})
export type SourceInput = z.output<typeof SourceInput>

export const SourceDto = z.object({ id: z.string(), citation: z.string(), doi: z.string().nullable(), origin: z.enum(SOURCE_ORIGINS), note: z.string().nullable() })
export type SourceDto = z.output<typeof SourceDto>
export const SourceListDto = z.object({ sources: z.array(SourceDto) })
export type SourceListDto = z.output<typeof SourceListDto>

import { z } from 'zod'
import { CHECK_STATES } from '../checks/transitions'
import { EvidenceItemDto } from '../evidence/item'
import { RecordEntry } from '../evidence/records/entry'
import { codeOf, lineOf } from './accepted'
import { SourceDto, SourceInput } from './source'

const KIND = z.string({ error: 'The kind of record is missing.' })

export const EnterRecordInput = z.strictObject({
  kind: KIND,
  agent: codeOf('The agent'),
  /** The batch it was measured on; null where the source does not say. */
  lot: codeOf('The lot').nullable().default(null),
  entry: RecordEntry,
  source: SourceInput,
})
export type EnterRecordInput = z.output<typeof EnterRecordInput>

/** A correction names the version it answers, and why; nothing is overwritten. */
export const CorrectRecordInput = z.strictObject({
  basedOn: z.number().int().min(1), entry: RecordEntry, source: SourceInput, lot: codeOf('The lot').nullable().default(null),
  reason: lineOf('The reason for the new version', 1000).refine(text => text.length >= 10, { error: 'The reason stays for good. Accepted: at least 10 characters.' }),
})
export type CorrectRecordInput = z.output<typeof CorrectRecordInput>

export const RecordRowDto = z.object({
  id: z.string(), rootId: z.string(), versionNo: z.number().int(), newestVersionNo: z.number().int(), kind: z.string(), title: z.string(), summary: z.string(), conditions: z.string(),
  agent: z.string(), lot: z.string().nullable(), source: SourceDto, by: z.string(), at: z.string(),
  checkState: z.enum(CHECK_STATES), checkSeq: z.number().int(),
})
export type RecordRowDto = z.output<typeof RecordRowDto>
export const RecordListDto = z.object({ records: z.array(RecordRowDto) })
export type RecordListDto = z.output<typeof RecordListDto>

export const RecordDto = RecordRowDto.extend({
  entry: RecordEntry,
  metal: z.string(),
  /** Why this version was made; null for the first. */
  reason: z.string().nullable(),
  evidence: z.array(EvidenceItemDto),
  versions: z.array(z.object({ id: z.string(), versionNo: z.number().int(), by: z.string(), at: z.string(), reason: z.string().nullable(), summary: z.string(), checkState: z.enum(CHECK_STATES) })),
  /** What the person who checked it said when it came back; null where it did not, or for partners. */
  returnComment: z.object({ comment: z.string(), by: z.string(), at: z.string() }).nullable(),
})
export type RecordDto = z.output<typeof RecordDto>
export const RecordStored = z.object({ id: z.string(), rootId: z.string(), versionNo: z.number().int() })

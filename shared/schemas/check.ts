import { z } from 'zod'
import { CHECK_STATES } from '../checks/transitions'
import { NamedQuantity } from '../evidence/quantity'

export const CheckKind = z.enum(['fit', 'record', 'batchVersion'])
export const CheckParams = z.object({ programme: z.string(), kind: CheckKind, id: z.uuid() })

/** Every step names the step it answers, so that the second of two people meets a conflict and not a surprise. */
export const CheckStep = z.strictObject({ expectedSeq: z.number().int().nonnegative(), comment: z.string().max(4000).default('') })
export type CheckStep = z.output<typeof CheckStep>

export const CheckEventDto = z.object({ seq: z.number(), event: z.enum(CHECK_STATES), comment: z.string(), personId: z.string(), personName: z.string(), at: z.string() })

export const CheckSubjectDto = z.object({
  kind: CheckKind,
  id: z.string(),
  chainId: z.string(),
  versionNo: z.number(),
  newestVersionNo: z.number(),
  title: z.string(),
  description: z.string(),
  agentCode: z.string().nullable(),
  mechanism: z.string().nullable(),
  topology: z.string().nullable(),
  enteredBy: z.array(z.object({ personId: z.string(), name: z.string() })),
  state: z.enum(CHECK_STATES),
  seq: z.number(),
  since: z.string().nullable(),
})
export type CheckSubjectDto = z.output<typeof CheckSubjectDto>

/** The number of a series of the same agent, measured the same way, that stands: to lay beside the one that is checked. */
export const OtherSlopeDto = z.object({
  seriesId: z.string(), versionNo: z.number(), lot: z.string(), at: z.string(), state: z.enum(CHECK_STATES), headline: NamedQuantity,
})
export const OtherSlopesDto = z.object({
  own: z.object({ lot: z.string(), headline: NamedQuantity }),
  others: z.array(OtherSlopeDto),
  /** All slopes against one common slope; null where the tubes carry no such test. */
  equal: z.object({ f: z.number(), df1: z.number(), df2: z.number(), p: z.number() }).nullable(),
})
export type OtherSlopesDto = z.output<typeof OtherSlopesDto>

export const CheckDto = CheckSubjectDto.extend({
  events: z.array(CheckEventDto),
  /** Why the person who asks may not sign; null = they may. */
  signingBarred: z.string().nullable(),
  /** Why two signatures are needed; null = one is enough. */
  secondSignature: z.string().nullable(),
  /** Why this subject cannot be sent for checking; null = it can. */
  submitBarred: z.string().nullable(),
  /** The waiting version whose place in the queue this one takes when it is signed or returned; null = none. */
  takesPlaceOf: z.number().nullable(),
  /** null for what is typed, and where no other series can be laid beside this one. */
  others: OtherSlopesDto.nullable(),
})
export type CheckDto = z.output<typeof CheckDto>

export const QueueItemDto = CheckSubjectDto.extend({ submittedBy: z.string(), flags: z.number(), mine: z.boolean() })
export type QueueItemDto = z.output<typeof QueueItemDto>

export const CheckStepDone = z.object({ state: z.enum(CHECK_STATES), seq: z.number() })

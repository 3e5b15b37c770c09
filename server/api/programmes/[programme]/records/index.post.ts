import { z } from 'zod'
import { EnterRecordInput, RecordStored } from '#shared/schemas/record'
import { enterRecord } from '~~/server/services/enterRecord'

export default defineRoute({
  variant: 'json',
  permission: 'record.enter',
  params: z.object({ programme: z.string() }),
  body: EnterRecordInput,
  output: RecordStored,
  run: ({ actor, programmeId, body, idempotency }) => enterRecord(useDeps(), { actor, programmeId, body, idempotency }),
})

import { z } from 'zod'
import { CorrectRecordInput, RecordStored } from '#shared/schemas/record'
import { correctRecord } from '~~/server/services/correctRecord'

export default defineRoute({
  variant: 'json',
  permission: 'record.enter',
  params: z.object({ programme: z.string(), id: z.uuid() }),
  body: CorrectRecordInput,
  output: RecordStored,
  run: ({ actor, programmeId, params, body, idempotency }) => correctRecord(useDeps(), { actor, programmeId, recordId: params.id, body, idempotency }),
})

import { BatchParams, VersionStored } from '#shared/schemas/agent'
import { BatchVersionInput } from '#shared/schemas/batch'
import { addBatchVersion } from '~~/server/services/registerBatch'

export default defineRoute({
  variant: 'json',
  permission: 'batch.register',
  params: BatchParams,
  body: BatchVersionInput,
  output: VersionStored,
  run: ({ actor, programmeId, params, body, idempotency }) => addBatchVersion(useDeps(), { actor, programmeId, code: params.code, lot: params.lot, ...body, idempotency }),
})

import { AgentParams, VersionStored } from '#shared/schemas/agent'
import { RegisterBatchInput } from '#shared/schemas/batch'
import { registerBatch } from '~~/server/services/registerBatch'

export default defineRoute({
  variant: 'json',
  permission: 'batch.register',
  params: AgentParams,
  body: RegisterBatchInput,
  output: VersionStored,
  run: ({ actor, programmeId, params, body, idempotency }) => registerBatch(useDeps(), { actor, programmeId, code: params.code, ...body, idempotency }),
})

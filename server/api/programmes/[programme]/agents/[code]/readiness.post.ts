import { AgentParams, VersionStored } from '#shared/schemas/agent'
import { EnterReadiness } from '#shared/schemas/readiness'
import { enterReadiness } from '~~/server/services/readiness'

export default defineRoute({
  variant: 'json',
  permission: 'readiness.enter',
  params: AgentParams,
  body: EnterReadiness,
  output: VersionStored,
  run: ({ actor, programmeId, params, body, idempotency }) => enterReadiness(useDeps(), { actor, programmeId, code: params.code, body, idempotency }),
})

import { AgentParams, AgentVersionInput, VersionStored } from '#shared/schemas/agent'
import { addAgentVersion } from '~~/server/services/addAgentVersion'

export default defineRoute({
  variant: 'json',
  permission: 'agent.register',
  params: AgentParams,
  body: AgentVersionInput,
  output: VersionStored,
  run: ({ actor, programmeId, params, body, idempotency }) => addAgentVersion(useDeps(), { actor, programmeId, code: params.code, body, idempotency }),
})

import { AgentParams } from '#shared/schemas/agent'
import { AgentStabilityDto } from '#shared/schemas/stability'
import { showAgentStability } from '~~/server/services/showStability'

export default defineRoute({
  variant: 'query',
  permission: 'record.see',
  params: AgentParams,
  output: AgentStabilityDto,
  run: ({ programmeId, scope, params }) => showAgentStability(useDeps(), { programmeId, scope, code: params.code }),
})

import { AgentDto, AgentParams } from '#shared/schemas/agent'
import { showAgent } from '~~/server/services/showAgent'

export default defineRoute({
  variant: 'query',
  permission: 'agent.see',
  params: AgentParams,
  output: AgentDto,
  run: ({ programmeId, scope, params }) => showAgent(useDeps(), { programmeId, scope, code: params.code }),
})

import { AgentParams } from '#shared/schemas/agent'
import { AgentRelaxivityDto } from '#shared/schemas/relaxivity'
import { agentRelaxivity } from '~~/server/services/agentRelaxivity'

export default defineRoute({
  variant: 'query',
  permission: 'agent.see',
  params: AgentParams,
  output: AgentRelaxivityDto,
  run: ({ params, programmeId, scope }) => agentRelaxivity(useDeps(), { programmeId, scope, code: params.code }),
})

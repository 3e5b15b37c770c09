import { z } from 'zod'
import { AgentListDto } from '#shared/schemas/agent'
import { listAgents } from '~~/server/services/listAgents'

export default defineRoute({
  variant: 'query',
  permission: 'agent.see',
  params: z.object({ programme: z.string() }),
  output: AgentListDto,
  run: ({ programmeId, scope }) => listAgents(useDeps(), { programmeId, scope }),
})

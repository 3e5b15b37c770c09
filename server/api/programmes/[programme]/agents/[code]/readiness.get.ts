import { AgentParams } from '#shared/schemas/agent'
import { ReadinessDto } from '#shared/schemas/readiness'
import { showReadiness } from '~~/server/services/readiness'

export default defineRoute({
  variant: 'query',
  permission: 'readiness.see',
  params: AgentParams,
  output: ReadinessDto,
  run: ({ programmeId, params }) => showReadiness(useDeps(), { programmeId, code: params.code }),
})

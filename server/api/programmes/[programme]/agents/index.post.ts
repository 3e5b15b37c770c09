import { z } from 'zod'
import { AgentRegistered, RegisterAgentInput } from '#shared/schemas/agent'
import { registerAgent } from '~~/server/services/registerAgent'

export default defineRoute({
  variant: 'json',
  permission: 'agent.register',
  params: z.object({ programme: z.string() }),
  body: RegisterAgentInput,
  output: AgentRegistered,
  run: ({ actor, programmeId, body, idempotency }) => registerAgent(useDeps(), { actor, programmeId, body, idempotency }),
})

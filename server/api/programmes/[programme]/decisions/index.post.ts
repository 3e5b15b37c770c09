import { z } from 'zod'
import { DecisionStored, RecordDecisionInput } from '#shared/schemas/decision'
import { recordDecision } from '~~/server/services/recordDecision'

export default defineRoute({
  variant: 'json',
  permission: 'decision.record',
  params: z.object({ programme: z.string() }),
  body: RecordDecisionInput,
  output: DecisionStored,
  run: ({ body, actor, programmeId, idempotency }) => recordDecision(useDeps(), { actor, programmeId, body, idempotency }),
})

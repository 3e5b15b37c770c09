import { z } from 'zod'
import { AcknowledgeInput, DecisionStored } from '#shared/schemas/decision'
import { acknowledgeNotice } from '~~/server/services/acknowledgeNotice'

export default defineRoute({
  variant: 'json',
  permission: 'decision.acknowledge',
  params: z.object({ programme: z.string(), id: z.uuid() }),
  body: AcknowledgeInput,
  output: DecisionStored,
  run: ({ params, body, actor, programmeId, idempotency }) => acknowledgeNotice(useDeps(), { actor, programmeId, id: params.id, note: body.note, idempotency }),
})

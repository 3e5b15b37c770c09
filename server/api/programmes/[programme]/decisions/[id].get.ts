import { z } from 'zod'
import { DecisionDto } from '#shared/schemas/decision'
import { isStaffScope, showDecision } from '~~/server/services/showDecision'
import { scopeOf } from '#shared/permissions'

export default defineRoute({
  variant: 'query',
  permission: 'decision.see',
  params: z.object({ programme: z.string(), id: z.uuid() }),
  output: DecisionDto,
  run: ({ params, actor, programmeId }) => showDecision(useDeps(), { programmeId, id: params.id, isStaff: isStaffScope(scopeOf(actor, 'people.see', programmeId)) }),
})

import { z } from 'zod'
import { DecisionListDto } from '#shared/schemas/decision'
import { isStaffScope, listDecisions } from '~~/server/services/showDecision'
import { scopeOf } from '#shared/permissions'

export default defineRoute({
  variant: 'query',
  permission: 'decision.see',
  params: z.object({ programme: z.string() }),
  output: DecisionListDto,
  run: ({ actor, programmeId }) => listDecisions(useDeps(), { programmeId, isStaff: isStaffScope(scopeOf(actor, 'people.see', programmeId)) }),
})

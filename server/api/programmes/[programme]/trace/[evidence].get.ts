import { z } from 'zod'
import { TraceDto } from '#shared/schemas/trace'
import { traceNumber } from '~~/server/services/traceNumber'

export default defineRoute({
  variant: 'query',
  permission: 'number.trace',
  params: z.object({ programme: z.string(), evidence: z.uuid() }),
  output: TraceDto,
  run: ({ params, programmeId, scope }) => traceNumber(useDeps(), { programmeId, scope, evidenceId: params.evidence }),
})

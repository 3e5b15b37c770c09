import { z } from 'zod'
import { RecordListDto } from '#shared/schemas/record'
import { listRecords } from '~~/server/services/showRecord'

export default defineRoute({
  variant: 'query',
  permission: 'record.see',
  params: z.object({ programme: z.string() }),
  query: z.object({ agent: z.string().max(60).optional() }),
  output: RecordListDto,
  run: ({ programmeId, scope, query }) => listRecords(useDeps(), { programmeId, scope, agent: query.agent }),
})

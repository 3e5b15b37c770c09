import { z } from 'zod'
import { RecordDto } from '#shared/schemas/record'
import { showRecord } from '~~/server/services/showRecord'

export default defineRoute({
  variant: 'query',
  permission: 'record.see',
  params: z.object({ programme: z.string(), id: z.uuid() }),
  output: RecordDto,
  run: ({ programmeId, scope, params }) => showRecord(useDeps(), { programmeId, scope, id: params.id }),
})

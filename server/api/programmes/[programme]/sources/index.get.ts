import { z } from 'zod'
import { SourceListDto } from '#shared/schemas/source'
import { listSources } from '~~/server/services/showRecord'

export default defineRoute({
  variant: 'query',
  permission: 'record.enter',
  params: z.object({ programme: z.string() }),
  output: SourceListDto,
  run: ({ programmeId }) => listSources(useDeps(), { programmeId }),
})

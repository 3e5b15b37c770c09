import { z } from 'zod'
import { QueueItemDto } from '#shared/schemas/check'
import { listQueue } from '~~/server/services/showCheck'

export default defineRoute({
  variant: 'query',
  permission: 'check.queue',
  params: z.object({ programme: z.string() }),
  output: z.array(QueueItemDto),
  run: ({ actor, programmeId }) => listQueue(useDeps(), { actor, programmeId }),
})

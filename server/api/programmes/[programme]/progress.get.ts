import { z } from 'zod'
import { ProgressQuery } from '#shared/schemas/progress'
import { followProgress } from '~~/server/services/followProgress'
import { sendEvents } from '~~/server/utils/sendEvents'

/** Server-sent events by default; with ?poll=1 one answer, for browsers and proxies that hold no stream. */
export default defineRoute({
  variant: 'stream',
  permission: 'progress.follow',
  query: ProgressQuery,
  output: z.unknown(),
  async run({ event, query, actor, programmeId }) {
    const read = () => followProgress(useDeps(), { sessionId: actor.sessionId, programmeId })
    return query.poll ? read() : sendEvents(event, { name: 'progress', everyMs: 1000, read, wait: useDeps().ear.wait })
  },
})

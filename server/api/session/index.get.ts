import { z } from 'zod'
import { SessionAnswer } from '../../../shared/schemas/session'
import { viewSession } from '../../services/viewSession'

/** Public, because the answer to "is anybody signed in?" is also "nobody". */
export default defineRoute({
  variant: 'query',
  permission: 'public',
  query: z.object({ programme: z.string().max(40).optional() }),
  output: SessionAnswer,
  run: async ({ actor, query }) => ({ signedIn: actor.personId === '' ? null : await viewSession(useDeps(), { actor, programmeCode: query.programme ?? null }) }),
})

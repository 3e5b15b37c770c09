import { v7 } from 'uuid'
import { findActor } from '../queries/people'
import { isId } from '../platform/ids'
import { useDeps } from '../utils/deps'
import { toHttpError } from '../utils/httpErrors'

/** Reads who asks from the database on every API request, so that a removed person or role is gone at once. */
export default defineEventHandler(async (event) => {
  if (!event.path.startsWith('/api/')) return
  event.context.requestId = v7()
  try {
    const { secure } = await getUserSession(event)
    event.context.actor = secure && isId(secure.sessionId) ? await findActor(useDeps().db, secure.sessionId) : null
  }
  catch (error) {
    throw toHttpError(error, event.context.requestId)
  }
})

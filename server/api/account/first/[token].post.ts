import { z } from 'zod'
import { Done, FirstAdministrator, Token } from '../../../../shared/schemas/session'
import { acceptFirstAdministrator } from '../../../services/firstAdministrator'
import { limitSource } from '../../../utils/rateLimit'
import { giveSession } from '../../../utils/sessionCookie'

export default defineRoute({
  variant: 'json',
  permission: 'public',
  params: z.object({ token: Token }),
  body: FirstAdministrator,
  output: Done,
  async run({ event, params, body }) {
    await limitSource(event)
    const { sessionId } = await acceptFirstAdministrator(useDeps(), { ...params, ...body })
    await giveSession(event, sessionId)
    return { done: true as const }
  },
})

import { z } from 'zod'
import { AcceptInvitation, Accepted } from '../../../shared/schemas/people'
import { Token } from '../../../shared/schemas/session'
import { acceptInvitation } from '../../services/acceptInvitation'
import { limitSource, sourceOf } from '../../utils/rateLimit'
import { giveSession } from '../../utils/sessionCookie'

export default defineRoute({
  variant: 'json',
  permission: 'public',
  params: z.object({ token: Token }),
  body: AcceptInvitation,
  output: Accepted,
  async run({ event, params, body, actor }) {
    await limitSource(event)
    const done = await acceptInvitation(useDeps(), { token: params.token, answer: body, actor: actor.personId === '' ? null : actor, source: sourceOf(event) })
    if (done.sessionId) await giveSession(event, done.sessionId)
    return { programmeCode: done.programmeCode }
  },
})

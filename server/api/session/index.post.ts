import { Done, SignIn } from '../../../shared/schemas/session'
import { signIn } from '../../services/signIn'
import { sourceOf } from '../../utils/rateLimit'
import { giveSession } from '../../utils/sessionCookie'

export default defineRoute({
  variant: 'json',
  permission: 'public',
  body: SignIn,
  output: Done,
  async run({ event, body }) {
    const { sessionId } = await signIn(useDeps(), { ...body, source: sourceOf(event) })
    await giveSession(event, sessionId)
    return { done: true as const }
  },
})

import { Done } from '../../../shared/schemas/session'
import { endSession } from '../../services/endSession'
import { takeSession } from '../../utils/sessionCookie'

export default defineRoute({
  variant: 'json',
  permission: 'account.use',
  output: Done,
  async run({ event, actor }) {
    const done = await endSession(useDeps(), { actor, sessionId: actor.sessionId })
    await takeSession(event)
    return done
  },
})

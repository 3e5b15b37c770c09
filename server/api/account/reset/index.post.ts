import { AskReset, Done } from '../../../../shared/schemas/session'
import { askReset } from '../../../services/askReset'
import { limitSource, sourceOf } from '../../../utils/rateLimit'

export default defineRoute({
  variant: 'json',
  permission: 'public',
  body: AskReset,
  output: Done,
  async run({ event, body }) {
    await limitSource(event)
    return askReset(useDeps(), { email: body.email, source: sourceOf(event) })
  },
})

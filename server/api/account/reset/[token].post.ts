import { z } from 'zod'
import { Done, ResetPassword, Token } from '../../../../shared/schemas/session'
import { resetPassword } from '../../../services/resetPassword'
import { limitSource, sourceOf } from '../../../utils/rateLimit'

export default defineRoute({
  variant: 'json',
  permission: 'public',
  params: z.object({ token: Token }),
  body: ResetPassword,
  output: Done,
  async run({ event, params, body }) {
    await limitSource(event)
    return resetPassword(useDeps(), { token: params.token, password: body.password, source: sourceOf(event) })
  },
})

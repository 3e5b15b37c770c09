import { ChangePassword, Done } from '../../../shared/schemas/session'
import { changePassword } from '../../services/changePassword'
import { sourceOf } from '../../utils/rateLimit'

export default defineRoute({
  variant: 'json',
  permission: 'account.use',
  body: ChangePassword,
  output: Done,
  run: ({ event, body, actor }) => changePassword(useDeps(), { ...body, actor, source: sourceOf(event) }),
})

import { z } from 'zod'
import { ResetShown, Token } from '../../../../shared/schemas/session'
import { showReset } from '../../../services/resetPassword'

/** Shows and changes nothing: mail programs follow links on their own. */
export default defineRoute({
  variant: 'query',
  permission: 'public',
  params: z.object({ token: Token }),
  output: ResetShown,
  run: ({ params }) => showReset(useDeps(), params),
})

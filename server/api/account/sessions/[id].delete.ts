import { z } from 'zod'
import { Done } from '../../../../shared/schemas/session'
import { endSession } from '../../../services/endSession'

export default defineRoute({
  variant: 'json',
  permission: 'account.use',
  params: z.object({ id: z.uuid() }),
  output: Done,
  run: ({ params, actor }) => endSession(useDeps(), { actor, sessionId: params.id }),
})

import { z } from 'zod'
import { Token } from '../../../../shared/schemas/session'
import { showFirstAdministrator } from '../../../services/firstAdministrator'

export default defineRoute({
  variant: 'query',
  permission: 'public',
  params: z.object({ token: Token }),
  output: z.object({ expiresAt: z.iso.datetime() }),
  run: ({ params }) => showFirstAdministrator(useDeps(), params),
})

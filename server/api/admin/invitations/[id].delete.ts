import { z } from 'zod'
import { Done } from '../../../../shared/schemas/session'
import { revokeInvitation } from '../../../services/revokeInvitation'

export default defineRoute({
  variant: 'json',
  permission: 'installation.people',
  params: z.object({ id: z.uuid() }),
  output: Done,
  run: ({ actor, params }) => revokeInvitation(useDeps(), { actor, programmeId: null, id: params.id }),
})

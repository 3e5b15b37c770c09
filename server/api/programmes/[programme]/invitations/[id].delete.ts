import { z } from 'zod'
import { Done } from '../../../../../shared/schemas/session'
import { revokeInvitation } from '../../../../services/revokeInvitation'

export default defineRoute({
  variant: 'json',
  permission: 'people.invite',
  params: z.object({ id: z.uuid() }),
  output: Done,
  run: ({ actor, programmeId, params }) => revokeInvitation(useDeps(), { actor, programmeId, id: params.id }),
})

import { z } from 'zod'
import { Done } from '../../../../../shared/schemas/session'
import { setRoles } from '../../../../services/setRoles'

/** No roles left: removed from the programme. */
export default defineRoute({
  variant: 'json',
  permission: 'people.setRoles',
  params: z.object({ id: z.uuid() }),
  output: Done,
  run: ({ actor, programmeId, params, idempotency }) => setRoles(useDeps(), { actor, programmeId, personId: params.id, roles: [], idempotency }),
})

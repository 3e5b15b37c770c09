import { z } from 'zod'
import { SetRoles } from '../../../../../shared/schemas/people'
import { Done } from '../../../../../shared/schemas/session'
import { setRoles } from '../../../../services/setRoles'

export default defineRoute({
  variant: 'json',
  permission: 'people.setRoles',
  params: z.object({ id: z.uuid() }),
  body: SetRoles,
  output: Done,
  run: ({ actor, programmeId, params, body, idempotency }) => setRoles(useDeps(), { actor, programmeId, personId: params.id, roles: body.roles, idempotency }),
})

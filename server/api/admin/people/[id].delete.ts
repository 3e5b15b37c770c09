import { z } from 'zod'
import { Done } from '../../../../shared/schemas/session'
import { removePerson } from '../../../services/installationPeople'

export default defineRoute({
  variant: 'json',
  permission: 'installation.people',
  params: z.object({ id: z.uuid() }),
  output: Done,
  run: ({ actor, params, idempotency }) => removePerson(useDeps(), { actor, personId: params.id, idempotency }),
})

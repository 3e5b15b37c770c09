import { z } from 'zod'
import { CreateProgramme } from '../../../../shared/schemas/installation'
import { createProgramme } from '../../../services/programmes'

export default defineRoute({
  variant: 'json',
  permission: 'installation.programmes',
  body: CreateProgramme,
  output: z.object({ programmeId: z.uuid(), code: z.string() }),
  run: ({ actor, body, idempotency }) => createProgramme(useDeps(), { actor, ...body, idempotency }),
})

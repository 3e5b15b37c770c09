import { z } from 'zod'
import { ProfileVersionDto, SaveProfileInput } from '#shared/schemas/profile'
import { saveProfile } from '~~/server/services/saveProfile'

export default defineRoute({
  variant: 'json',
  permission: 'profile.save',
  params: z.object({ programme: z.string() }),
  body: SaveProfileInput,
  output: ProfileVersionDto,
  run: ({ body, actor, programmeId, idempotency }) => saveProfile(useDeps(), { actor, programmeId, body, idempotency }),
})

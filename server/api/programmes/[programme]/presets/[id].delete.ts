import { z } from 'zod'
import { PresetParams } from '#shared/schemas/preset'
import { removePreset } from '~~/server/services/savePreset'

export default defineRoute({
  variant: 'json',
  permission: 'upload.stage',
  params: PresetParams,
  output: z.object({ done: z.literal(true) }),
  run: ({ params, actor, programmeId }) => removePreset(useDeps(), { actor, programmeId, id: params.id }),
})

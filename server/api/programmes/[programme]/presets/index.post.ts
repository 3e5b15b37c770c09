import { PresetsDto, SavePreset } from '#shared/schemas/preset'
import { savePreset } from '~~/server/services/savePreset'

export default defineRoute({
  variant: 'json',
  permission: 'upload.stage',
  body: SavePreset,
  output: PresetsDto,
  run: ({ body, actor, programmeId }) => savePreset(useDeps(), { actor, programmeId, preset: body }),
})

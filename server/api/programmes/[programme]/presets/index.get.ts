import { PresetQuery, PresetsDto } from '#shared/schemas/preset'
import { showPresets } from '~~/server/services/showPresets'

export default defineRoute({
  variant: 'query',
  permission: 'upload.stage',
  query: PresetQuery,
  output: PresetsDto,
  run: ({ query, programmeId }) => showPresets(useDeps(), { programmeId, kind: query.kind }),
})

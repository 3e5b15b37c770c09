import { TubeSheetList } from '#shared/schemas/tubeSheet'
import { showTubeSheets } from '~~/server/services/tubeSheets'

export default defineRoute({
  variant: 'query',
  permission: 'sheet.see',
  output: TubeSheetList,
  run: ({ programmeId }) => showTubeSheets(useDeps(), { programmeId }),
})

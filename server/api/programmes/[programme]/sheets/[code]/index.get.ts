import { SheetParams, TubeSheetDto } from '#shared/schemas/tubeSheet'
import { showTubeSheet } from '~~/server/services/tubeSheets'

export default defineRoute({
  variant: 'query',
  permission: 'sheet.see',
  params: SheetParams,
  output: TubeSheetDto,
  run: ({ params, programmeId }) => showTubeSheet(useDeps(), { programmeId, code: params.code }),
})

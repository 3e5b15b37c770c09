import { FitDto, FitParams } from '#shared/schemas/fit'
import { showFit } from '~~/server/services/showFit'

export default defineRoute({
  variant: 'query',
  permission: 'series.see',
  params: FitParams,
  output: FitDto,
  run: ({ params, programmeId, scope }) => showFit(useDeps(), { programmeId, scope, seriesId: params.id, versionNo: params.version }),
})

import { FigureSpec } from '#shared/schemas/figure'
import { TubeFigureParams } from '#shared/schemas/fit'
import { showTubeFigure } from '~~/server/services/showFit'

export default defineRoute({
  variant: 'query',
  permission: 'series.see',
  params: TubeFigureParams,
  output: FigureSpec,
  run: ({ params, programmeId, scope }) => showTubeFigure(useDeps(), { programmeId, scope, seriesId: params.id, versionNo: params.version, tubeNo: params.tube }),
})

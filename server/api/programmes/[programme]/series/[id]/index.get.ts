import { SeriesDto, SeriesParams } from '#shared/schemas/series'
import { showSeries } from '~~/server/services/showSeries'

export default defineRoute({
  variant: 'query',
  permission: 'series.see',
  params: SeriesParams,
  output: SeriesDto,
  run: ({ params, programmeId, scope }) => showSeries(useDeps(), { programmeId, scope, seriesId: params.id }),
})

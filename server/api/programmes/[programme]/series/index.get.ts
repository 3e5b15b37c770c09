import { SeriesListDto, SeriesQuery } from '#shared/schemas/series'
import { listSeries } from '~~/server/services/listSeries'

export default defineRoute({
  variant: 'query',
  permission: 'series.see',
  query: SeriesQuery,
  output: SeriesListDto,
  run: ({ query, programmeId, scope }) => listSeries(useDeps(), { programmeId, scope, query }),
})

import { CompareDto, CompareQuery } from '#shared/schemas/fit'
import { SeriesParams } from '#shared/schemas/series'
import { compareFits } from '~~/server/services/compareFits'

export default defineRoute({
  variant: 'query',
  permission: 'fit.request',
  params: SeriesParams,
  query: CompareQuery,
  output: CompareDto,
  run: ({ params, query, programmeId }) => compareFits(useDeps(), { programmeId, seriesId: params.id, versions: query.versions }),
})

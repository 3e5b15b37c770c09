import { CorrectRequest, SeriesCorrected, SeriesParams } from '#shared/schemas/series'
import { correctConditions } from '~~/server/services/correctConditions'

export default defineRoute({
  variant: 'json',
  permission: 'series.correct',
  params: SeriesParams,
  body: CorrectRequest,
  output: SeriesCorrected,
  run: ({ params, body, actor, programmeId, idempotency }) => correctConditions(useDeps(), { actor, programmeId, seriesId: params.id, request: body, idempotency }),
})

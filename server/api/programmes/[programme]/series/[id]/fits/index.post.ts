import { FitRequest, FitRequested } from '#shared/schemas/fit'
import { SeriesParams } from '#shared/schemas/series'
import { requestFit } from '~~/server/services/requestFit'

export default defineRoute({
  variant: 'json',
  permission: 'fit.request',
  params: SeriesParams,
  body: FitRequest,
  output: FitRequested,
  run: ({ params, body, actor, programmeId, idempotency }) => requestFit(useDeps(), { actor, programmeId, seriesId: params.id, request: body, idempotency }),
})

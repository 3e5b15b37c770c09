import { SeriesParams, SeriesWithdrawn, WithdrawRequest } from '#shared/schemas/series'
import { withdrawSeries } from '~~/server/services/withdrawSeries'

export default defineRoute({
  variant: 'json',
  permission: 'series.withdraw',
  params: SeriesParams,
  body: WithdrawRequest,
  output: SeriesWithdrawn,
  run: ({ params, body, actor, programmeId, idempotency }) => withdrawSeries(useDeps(), { actor, programmeId, seriesId: params.id, reason: body.reason, idempotency }),
})

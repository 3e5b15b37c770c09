import { FitParams, RepeatDto } from '#shared/schemas/fit'
import { repeatFit } from '~~/server/services/repeatFit'

export default defineRoute({
  variant: 'json',
  permission: 'fit.repeat',
  params: FitParams,
  output: RepeatDto,
  run: ({ params, actor, programmeId, idempotency }) => repeatFit(useDeps(), { actor, programmeId, seriesId: params.id, versionNo: params.version, idempotency }),
})

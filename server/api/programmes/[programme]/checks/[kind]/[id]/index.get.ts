import { CheckDto, CheckParams } from '#shared/schemas/check'
import { showCheck } from '~~/server/services/showCheck'

export default defineRoute({
  variant: 'query',
  permission: 'check.see',
  params: CheckParams,
  output: CheckDto,
  run: ({ params, actor, programmeId }) => showCheck(useDeps(), { actor, programmeId, kind: params.kind, id: params.id }),
})

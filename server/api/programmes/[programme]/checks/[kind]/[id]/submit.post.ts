import { CheckParams, CheckStep, CheckStepDone } from '#shared/schemas/check'
import { submitForCheck } from '~~/server/services/submitForCheck'

export default defineRoute({
  variant: 'json',
  permission: 'check.submit',
  params: CheckParams,
  body: CheckStep,
  output: CheckStepDone,
  run: ({ params, body, actor, programmeId, idempotency }) => submitForCheck(useDeps(), { actor, programmeId, kind: params.kind, id: params.id, ...body, idempotency }),
})

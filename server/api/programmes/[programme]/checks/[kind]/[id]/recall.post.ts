import { CheckParams, CheckStep, CheckStepDone } from '#shared/schemas/check'
import { recallCheck } from '~~/server/services/returnEvidence'

export default defineRoute({
  variant: 'json',
  permission: 'check.submit',
  params: CheckParams,
  body: CheckStep,
  output: CheckStepDone,
  run: ({ params, body, actor, programmeId, idempotency }) => recallCheck(useDeps(), { actor, programmeId, kind: params.kind, id: params.id, ...body, idempotency }),
})

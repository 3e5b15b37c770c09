import { CheckParams, CheckStep, CheckStepDone } from '#shared/schemas/check'
import { returnEvidence } from '~~/server/services/returnEvidence'

export default defineRoute({
  variant: 'json',
  permission: 'check.return',
  params: CheckParams,
  body: CheckStep,
  output: CheckStepDone,
  run: ({ params, body, actor, programmeId, idempotency }) => returnEvidence(useDeps(), { actor, programmeId, kind: params.kind, id: params.id, ...body, idempotency }),
})

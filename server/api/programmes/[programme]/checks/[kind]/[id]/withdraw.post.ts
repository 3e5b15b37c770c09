import { CheckParams, CheckStep, CheckStepDone } from '#shared/schemas/check'
import { withdrawSignature } from '~~/server/services/returnEvidence'

export default defineRoute({
  variant: 'json',
  permission: 'check.withdraw',
  params: CheckParams,
  body: CheckStep,
  output: CheckStepDone,
  run: ({ params, body, actor, programmeId, idempotency }) => withdrawSignature(useDeps(), { actor, programmeId, kind: params.kind, id: params.id, ...body, idempotency }),
})

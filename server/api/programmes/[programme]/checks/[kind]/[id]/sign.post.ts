import { CheckParams, CheckStep, CheckStepDone } from '#shared/schemas/check'
import { signEvidence } from '~~/server/services/signEvidence'

export default defineRoute({
  variant: 'json',
  permission: 'check.sign',
  params: CheckParams,
  body: CheckStep,
  output: CheckStepDone,
  run: ({ params, body, actor, programmeId, idempotency }) => signEvidence(useDeps(), { actor, programmeId, kind: params.kind, id: params.id, ...body, idempotency }),
})

import { AssignGap, GapAssigned } from '#shared/schemas/gap'
import { assignGap } from '~~/server/services/gaps'

export default defineRoute({
  variant: 'json',
  permission: 'gap.assign',
  body: AssignGap,
  output: GapAssigned,
  run: ({ actor, programmeId, body, idempotency }) => assignGap(useDeps(), { actor, programmeId, body, idempotency }),
})

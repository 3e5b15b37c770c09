import { InvitationRow, InviteMember } from '../../../../../shared/schemas/people'
import { invite } from '../../../../services/invite'

export default defineRoute({
  variant: 'json',
  permission: 'people.invite',
  body: InviteMember,
  output: InvitationRow,
  run: ({ actor, programmeId, body, idempotency }) => invite(useDeps(), { actor, programmeId, ...body, idempotency }),
})

import { InvitationRow, InviteFromInstallation } from '../../../../shared/schemas/people'
import { inviteFromInstallation } from '../../../services/inviteFromInstallation'

export default defineRoute({
  variant: 'json',
  permission: 'installation.people',
  body: InviteFromInstallation,
  output: InvitationRow,
  run: ({ actor, body, idempotency }) => inviteFromInstallation(useDeps(), { actor, wish: body, idempotency }),
})

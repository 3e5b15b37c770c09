import { Invitations } from '../../../../shared/schemas/people'
import { listInvitations } from '../../../services/listMembers'

export default defineRoute({
  variant: 'query',
  permission: 'installation.people',
  output: Invitations,
  run: () => listInvitations(useDeps(), {}),
})

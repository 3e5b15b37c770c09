import { Invitations } from '../../../../../shared/schemas/people'
import { listInvitations } from '../../../../services/listMembers'

export default defineRoute({
  variant: 'query',
  permission: 'people.invite',
  output: Invitations,
  run: ({ programmeId }) => listInvitations(useDeps(), { programmeId }),
})

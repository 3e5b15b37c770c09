import { Members } from '../../../../../shared/schemas/people'
import { listMembers } from '../../../../services/listMembers'

export default defineRoute({
  variant: 'query',
  permission: 'people.see',
  output: Members,
  run: ({ actor, programmeId }) => listMembers(useDeps(), { actor, programmeId }),
})

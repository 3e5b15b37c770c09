import { OwnSessions } from '../../../../shared/schemas/session'
import { listOwnSessions } from '../../../services/listOwnSessions'

export default defineRoute({
  variant: 'query',
  permission: 'account.use',
  output: OwnSessions,
  run: ({ actor }) => listOwnSessions(useDeps(), { actor }),
})

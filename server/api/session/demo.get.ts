import { DemoAccounts } from '../../../shared/schemas/session'
import { listDemoAccounts } from '../../services/listDemoAccounts'

export default defineRoute({
  variant: 'query',
  permission: 'public',
  output: DemoAccounts,
  run: () => listDemoAccounts(useDeps()),
})

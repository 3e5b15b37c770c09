import { SystemState } from '../../../../shared/schemas/installation'
import { systemState } from '../../../services/systemState'

export default defineRoute({
  variant: 'query',
  permission: 'installation.system',
  output: SystemState,
  run: () => systemState(useDeps()),
})

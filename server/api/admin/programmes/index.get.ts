import { InstallationProgrammes } from '../../../../shared/schemas/installation'
import { listProgrammes } from '../../../services/programmes'

export default defineRoute({
  variant: 'query',
  permission: 'installation.programmes',
  output: InstallationProgrammes,
  run: () => listProgrammes(useDeps()),
})

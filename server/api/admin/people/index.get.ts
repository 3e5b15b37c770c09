import { InstallationPeople } from '../../../../shared/schemas/installation'
import { listInstallationPeople } from '../../../services/installationPeople'

export default defineRoute({
  variant: 'query',
  permission: 'installation.people',
  output: InstallationPeople,
  run: ({ actor }) => listInstallationPeople(useDeps(), { actor }),
})

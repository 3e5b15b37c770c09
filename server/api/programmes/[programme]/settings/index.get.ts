import { ProgrammeSettings } from '../../../../../shared/schemas/people'
import { showSettings } from '../../../../services/programmeSettings'

export default defineRoute({
  variant: 'query',
  permission: 'programme.see',
  output: ProgrammeSettings,
  run: ({ programmeId }) => showSettings(useDeps(), { programmeId }),
})

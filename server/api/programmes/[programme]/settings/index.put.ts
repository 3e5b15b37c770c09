import { ChangeSettings, ProgrammeSettings } from '../../../../../shared/schemas/people'
import { changeSettings } from '../../../../services/programmeSettings'

export default defineRoute({
  variant: 'json',
  permission: 'programme.configure',
  body: ChangeSettings,
  output: ProgrammeSettings,
  run: ({ actor, programmeId, body, idempotency }) => changeSettings(useDeps(), { actor, programmeId, change: body, idempotency }),
})

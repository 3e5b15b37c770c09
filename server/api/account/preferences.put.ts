import { Preferences } from '../../../shared/schemas/session'
import { savePreferences } from '../../services/savePreferences'

export default defineRoute({
  variant: 'json',
  permission: 'account.use',
  body: Preferences,
  output: Preferences,
  run: ({ body, actor }) => savePreferences(useDeps(), { actor, preferences: body }),
})

import { ChangeName, Done } from '../../../shared/schemas/session'
import { changeName } from '../../services/changeName'

export default defineRoute({
  variant: 'json',
  permission: 'account.use',
  body: ChangeName,
  output: Done,
  run: ({ body, actor }) => changeName(useDeps(), { ...body, actor }),
})

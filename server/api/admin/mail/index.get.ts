import { MailPage, MailQuery } from '../../../../shared/schemas/installation'
import { listMail } from '../../../services/listMail'
import { isMailCaught } from '../../../utils/settings'

export default defineRoute({
  variant: 'query',
  permission: 'installation.mail',
  query: MailQuery,
  output: MailPage,
  run: ({ query }) => listMail(useDeps(), { page: query.page, isCaught: isMailCaught() }),
})

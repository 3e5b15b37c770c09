import { AppError } from '../../shared/errors'

/** Whatever no file answers: unknown routes deny, and say no more than that. */
export default defineRoute({
  variant: 'query',
  permission: 'account.use',
  async run() { throw new AppError('notFound', 'There is no such page, or it is not open to you.') },
})

import { z } from 'zod'
import { InvitationShown } from '../../../shared/schemas/people'
import { Token } from '../../../shared/schemas/session'
import { showInvitation } from '../../services/acceptInvitation'

/** Shows and changes nothing: mail programs follow links on their own. */
export default defineRoute({
  variant: 'query',
  permission: 'public',
  params: z.object({ token: Token }),
  output: InvitationShown,
  run: ({ params, actor }) => showInvitation(useDeps(), { token: params.token, actor: actor.personId === '' ? null : actor }),
})

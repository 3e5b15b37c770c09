import type { Actor } from '../../shared/permissions'
import { AppError } from '../../shared/errors'
import type { Deps } from '../platform/deps'
import { closeInvitation, findAnyInvitation, findInvitation } from '../queries/invitations'
import { unitOfWork } from './unitOfWork'

/**
 * Takes an open invitation back. programmeId: the programme whose lead does it; null = the administrator, for any.
 * @throws AppError('notFound' | 'conflict')
 */
export async function revokeInvitation(deps: Deps, { actor, id, programmeId }: { actor: Actor, id: string, programmeId: string | null }): Promise<{ done: true }> {
  const row = programmeId === null ? await findAnyInvitation(deps.db, id) : await findInvitation(deps.db, id, programmeId)
  if (!row) throw new AppError('notFound', 'There is no such invitation, or it is not open to you.')
  return unitOfWork(deps, { actor, name: 'revokeInvitation', programmeId: row.programmeId }, async ({ trx }) => {
    if (!await closeInvitation(trx, row.id, 'revoked')) throw new AppError('conflict', 'This invitation is not open any more.')
    return { result: { done: true as const }, subject: `invitation ${row.id}`, payload: { email: row.email } }
  })
}

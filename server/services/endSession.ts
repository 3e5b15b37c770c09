import { AppError } from '../../shared/errors'
import type { Actor } from '../../shared/permissions'
import type { Deps } from '../platform/deps'
import { endSessionRow } from '../queries/sessions'
import { unitOfWork } from './unitOfWork'

/** Signs out: this session or another of one's own. @throws AppError('notFound') for a session that is over or somebody else's */
export async function endSession(deps: Deps, { actor, sessionId }: { actor: Actor, sessionId: string }): Promise<{ done: true }> {
  return unitOfWork(deps, { actor, name: 'endSession', programmeId: null }, async ({ trx }) => {
    if (!await endSessionRow(trx, { id: sessionId, personId: actor.personId })) throw new AppError('notFound', 'There is no such session, or it has ended.')
    return { result: { done: true as const }, subject: `person ${actor.personId}`, payload: { session: sessionId === actor.sessionId ? 'this one' : 'another' } }
  })
}

import type { Actor } from '../../shared/permissions'
import type { OwnSessions } from '../../shared/schemas/session'
import type { Deps } from '../platform/deps'
import { openSessions } from '../queries/sessions'

/** Where the person is signed in now, this session marked. */
export async function listOwnSessions({ db }: Pick<Deps, 'db'>, { actor }: { actor: Actor }): Promise<OwnSessions> {
  const rows = await openSessions(db, actor.personId)
  return { sessions: rows.map(row => ({ id: row.id, startedAt: row.startedAt.toISOString(), expiresAt: row.expiresAt.toISOString(), isThis: row.id === actor.sessionId })) }
}

import type { Knex } from 'knex'
import { dropOldSessions, insertSession } from '../queries/sessions'

/** A session lasts a working day; the cookie that names it lasts as long. */
export const SESSION_HOURS = 12

/** Starts a session inside a command's transaction. @returns its id, which goes into the sealed cookie and nowhere else */
export async function openSession(trx: Knex.Transaction, { id, personId }: { id: string, personId: string }): Promise<string> {
  await dropOldSessions(trx, personId)
  await insertSession(trx, { id, personId, hours: SESSION_HOURS })
  return id
}

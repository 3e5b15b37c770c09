import type { Knex } from 'knex'
import { fromBinary, toBinary } from '../platform/ids'

export interface SessionRow { id: string, startedAt: Date, expiresAt: Date }

/** A session of the person's present epoch; it runs out by the database's clock. */
export async function insertSession(trx: Knex, one: { id: string, personId: string, hours: number }): Promise<void> {
  const epoch = trx('person').where({ id: toBinary(one.personId) }).select('session_epoch')
  await trx('session').insert({
    id: toBinary(one.id), person_id: toBinary(one.personId), epoch, created_at: trx.raw('NOW(6)'), expires_at: trx.raw('DATE_ADD(NOW(6), INTERVAL ? HOUR)', [one.hours]),
  })
}

/** @returns false when the person has no such session that is still open */
export async function endSessionRow(trx: Knex, { id, personId }: { id: string, personId: string }): Promise<boolean> {
  return await trx('session').where({ id: toBinary(id), person_id: toBinary(personId) }).whereNull('ended_at').update({ ended_at: trx.raw('NOW(6)') }) === 1
}

/** Ends every session of a person but the one named, by raising the epoch that sessions must carry. */
export async function endOtherSessions(trx: Knex, personId: string, keepSessionId: string | null): Promise<void> {
  const person = toBinary(personId)
  await trx('person').where({ id: person }).update({ session_epoch: trx.raw('session_epoch + 1') })
  if (keepSessionId === null) return
  const epoch = trx('person').where({ id: person }).select('session_epoch')
  // Only a session that holds now is carried over: raising the epoch of an ended one would bring it back.
  await trx('session').where({ id: toBinary(keepSessionId), person_id: person }).whereNull('ended_at').update({ epoch })
}

export async function openSessions(db: Knex, personId: string): Promise<SessionRow[]> {
  const rows = await db('session').join('person', 'person.id', 'session.person_id').where('session.person_id', toBinary(personId)).whereNull('session.ended_at')
    .whereRaw('session.expires_at > NOW(6)').whereRaw('session.epoch = person.session_epoch').orderBy('session.created_at', 'desc')
    .select('session.id', 'session.created_at', 'session.expires_at') as { id: Buffer, created_at: Date, expires_at: Date }[]
  return rows.map(row => ({ id: fromBinary(row.id), startedAt: row.created_at, expiresAt: row.expires_at }))
}

/** Sessions that ran out more than a day ago are of no use to anybody. */
export async function dropOldSessions(db: Knex, personId: string): Promise<void> {
  await db('session').where({ person_id: toBinary(personId) }).whereRaw('expires_at < DATE_SUB(NOW(6), INTERVAL 1 DAY)').delete()
}

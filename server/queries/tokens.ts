import type { Knex } from 'knex'
import { fromBinary, fromBinaryOrNull, toBinary, toBinaryOrNull } from '../platform/ids'

export type TokenPurpose = 'resetPassword' | 'firstAdministrator'
export interface TokenRow { id: string, personId: string | null, createdAt: Date, expiresAt: Date, usedAt: Date | null, isExpired: boolean }

export async function insertToken(trx: Knex, one: { id: string, purpose: TokenPurpose, hash: Buffer, personId: string | null, minutes: number, at: Date }): Promise<void> {
  await trx('one_time_token').insert({
    id: toBinary(one.id), purpose: one.purpose, token_hash: one.hash, person_id: toBinaryOrNull(one.personId), created_at: one.at,
    expires_at: trx.raw('DATE_ADD(NOW(6), INTERVAL ? MINUTE)', [one.minutes]),
  })
}

export async function findToken(db: Knex, purpose: TokenPurpose, hash: Buffer): Promise<TokenRow | null> {
  const row = await db('one_time_token').where({ purpose, token_hash: hash }).first('*', db.raw('expires_at <= NOW(6) AS is_expired')) as
    { id: Buffer, person_id: Buffer | null, created_at: Date, expires_at: Date, used_at: Date | null, is_expired: number } | undefined
  if (!row) return null
  return { id: fromBinary(row.id), personId: fromBinaryOrNull(row.person_id), createdAt: row.created_at, expiresAt: row.expires_at, usedAt: row.used_at, isExpired: Boolean(row.is_expired) }
}

/** Uses a token up. @returns false when it was used or ran out before: of two who come at once, one gets true */
export async function consumeToken(trx: Knex, id: string): Promise<boolean> {
  return await trx('one_time_token').where({ id: toBinary(id) }).whereNull('used_at').whereRaw('expires_at > NOW(6)').update({ used_at: trx.raw('NOW(6)') }) === 1
}

/** Uses up every other open token of a purpose, of one person or of nobody. */
export async function voidTokens(trx: Knex, purpose: TokenPurpose, personId: string | null): Promise<void> {
  await trx('one_time_token').where({ purpose, person_id: toBinaryOrNull(personId) }).whereNull('used_at').update({ used_at: trx.raw('NOW(6)') })
}

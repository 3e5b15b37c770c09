import type { Knex } from 'knex'
import { toBinary } from '../platform/ids'

/** Failures and how long ago the last one was, by the database's clock; null = none. */
export interface Failures { count: number, sinceLast_s: number | null }

export async function insertAttempt(db: Knex, one: { id: string, accountKey: Buffer, source: string, succeeded: boolean }): Promise<void> {
  await db('sign_in_attempt').insert({ id: toBinary(one.id), at: db.raw('NOW(6)'), account_key: one.accountKey, source: one.source, succeeded: one.succeeded })
}

/** Failures of an account within the window and since it last signed in; `exceptId` leaves one's own attempt out. */
export async function accountFailures(db: Knex, accountKey: Buffer, window_s: number, exceptId: string | null = null): Promise<Failures> {
  const lastSuccess = db('sign_in_attempt').where({ account_key: accountKey, succeeded: true }).select(db.raw(`COALESCE(MAX(at), '1970-01-01')`))
  return count(db, db('sign_in_attempt').where({ account_key: accountKey, succeeded: false }).where('at', '>', lastSuccess), window_s, exceptId)
}

/** Failures from an address within the window. A success does not clear them: whoever has one account could try all others. */
export async function sourceFailures(db: Knex, source: string, window_s: number, exceptId: string | null = null): Promise<Failures> {
  // The row that an attempt writes before its password is looked at counts as a failure until a success of the same account follows it.
  const failed = db('sign_in_attempt as f').where({ 'f.source': source, 'f.succeeded': false })
    .whereNotExists(db('sign_in_attempt as s').select(db.raw('1')).whereRaw('s.account_key = f.account_key').where({ 's.succeeded': true, 's.source': source }).whereRaw('s.at >= f.at'))
  return count(db, failed, window_s, exceptId, 'f.')
}

async function count(db: Knex, query: Knex.QueryBuilder, window_s: number, exceptId: string | null, prefix = ''): Promise<Failures> {
  const row = await query.where(`${prefix}at`, '>', db.raw('DATE_SUB(NOW(6), INTERVAL ? SECOND)', [window_s]))
    .modify((one) => { if (exceptId) void one.whereNot(`${prefix}id`, toBinary(exceptId)) })
    .first(db.raw('COUNT(*) AS n'), db.raw(`TIMESTAMPDIFF(MICROSECOND, MAX(${prefix}at), NOW(6)) / 1e6 AS since_s`)) as { n: number, since_s: string | number | null }
  return { count: Number(row.n), sinceLast_s: row.since_s === null ? null : Number(row.since_s) }
}

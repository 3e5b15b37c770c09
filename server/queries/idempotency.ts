import type { Knex } from 'knex'
import { toBinary } from '../platform/ids'

export interface Remembered { command: string, requestHash: Buffer, response: unknown }

/** What a person's command with this key answered before; null = first time. */
export async function findRemembered(trx: Knex, personId: string, key: string): Promise<Remembered | null> {
  const row = await trx('idempotency').where({ person_id: toBinary(personId), idempotency_key: key }).first('command', 'request_hash', 'response') as { command: string, request_hash: Buffer, response: string } | undefined
  return row ? { command: row.command, requestHash: row.request_hash, response: JSON.parse(row.response) } : null
}

export async function remember(trx: Knex, entry: { personId: string, key: string, command: string, requestHash: Buffer, response: unknown, at: Date }): Promise<void> {
  await trx('idempotency').insert({ person_id: toBinary(entry.personId), idempotency_key: entry.key, command: entry.command, request_hash: entry.requestHash, response: JSON.stringify(entry.response ?? null), created_at: entry.at })
}

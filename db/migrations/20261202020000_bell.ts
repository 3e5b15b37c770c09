import type { Knex } from 'knex'

/** Loopback port at which a worker can be woken; null for processes that only poll. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw('ALTER TABLE process_beat ADD COLUMN IF NOT EXISTS wake_port INT NULL')
}

export async function down(knex: Knex): Promise<void> {
  await knex.raw('ALTER TABLE process_beat DROP COLUMN IF EXISTS wake_port')
}

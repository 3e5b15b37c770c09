import type { Knex } from 'knex'

/** Confirmed uploads: the files that must never be lost. */
export async function uploadSize(db: Knex): Promise<{ count: number, bytes: number }> {
  const row = await db('upload').first(db.raw('COUNT(*) AS n'), db.raw('COALESCE(SUM(bytes), 0) AS bytes')) as { n: number, bytes: number | string }
  return { count: Number(row.n), bytes: Number(row.bytes) }
}

/** Version of the server, size of tables and indexes, and how many migrations it went through. */
export async function databaseState(db: Knex): Promise<{ version: string, bytes: number, migrations: number }> {
  const [[row]] = await db.raw(`SELECT VERSION() AS version, (SELECT COALESCE(SUM(data_length + index_length), 0) FROM information_schema.tables WHERE table_schema = DATABASE()) AS bytes,
    (SELECT COUNT(*) FROM schema_migration) AS migrations`) as [[{ version: string, bytes: number | string, migrations: number }]]
  return { version: row.version, bytes: Number(row.bytes), migrations: Number(row.migrations) }
}

/** Jobs that wait for a worker now; others are ready but meant for later. */
export async function countDueJobs(db: Knex): Promise<number> {
  const row = await db('job').where({ state: 'ready' }).where('run_after', '<=', db.raw('NOW(6)')).count({ n: '*' }).first() as { n: number }
  return Number(row.n)
}

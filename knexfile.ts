import type { Knex } from 'knex'
import { fileURLToPath } from 'node:url'

/** Migrations run as the owner of the schema; the application's own account may not change tables. */
const config: Knex.Config = {
  client: 'mysql2',
  connection: process.env.DATABASE_MIGRATION_URL ?? process.env.DATABASE_URL ?? '',
  pool: { min: 0, max: 2 },
  migrations: {
    directory: fileURLToPath(new URL('./db/migrations', import.meta.url)),
    extension: 'ts',
    loadExtensions: ['.ts'],
    tableName: 'schema_migration',
  },
}

export default config

import { inject } from 'vitest'
import type { Knex } from 'knex'
import { openDatabase } from '../../server/platform/database'

/** The schema's owner, who may do what the application's account may not: for tests that tamper. */
export const openAsOwner = (): Knex => openDatabase(inject('databaseMigrationUrl'), { maxConnections: 2 })

/** Names of all tables of the schema in use. */
export async function tableNames(db: Knex): Promise<string[]> {
  const [rows] = await db.raw('SELECT table_name AS name FROM information_schema.tables WHERE table_schema = DATABASE() AND table_type = \'BASE TABLE\' ORDER BY table_name') as [{ name: string }[]]
  return rows.map(row => row.name)
}

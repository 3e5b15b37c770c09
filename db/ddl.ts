import type { Knex } from 'knex'

/**
 * Creates a table unless it is there: MariaDB commits on DDL, so a migration that failed half way is run again from its start.
 * utf8mb4_bin, because unicode collations equate c1ccccc1 with C1CCCCC1 and mM with MM; columns people search by are *_ci on purpose.
 */
export async function createTable(knex: Knex, name: string, definition: string): Promise<void> {
  await knex.raw(`CREATE TABLE IF NOT EXISTS ${name} (${definition}) ENGINE=InnoDB CHARACTER SET utf8mb4 COLLATE utf8mb4_bin`)
}

/** Drops tables in the order given: children first. */
export async function dropTables(knex: Knex, ...names: string[]): Promise<void> {
  for (const name of names) await knex.raw(`DROP TABLE IF EXISTS ${name}`)
}

/**
 * Gives the application's account UPDATE (and DELETE where asked) on a table whose rows may change. Every other table is append-only for it:
 * the account has SELECT and INSERT on the schema and nothing more, so no bug of ours can rewrite a raw point or a signature.
 */
export async function grantMutable(knex: Knex, name: string, rights: 'UPDATE' | 'UPDATE, DELETE' | 'DELETE' = 'UPDATE'): Promise<void> {
  const account = applicationAccount()
  if (!account) return
  for (const host of account.hosts) await knex.raw(`GRANT ${rights} ON ${name} TO ??@??`.replace('??@??', `'${account.user}'@'${host}'`))
}

/** SELECT and INSERT on the whole schema; run once, by the first migration. */
export async function grantReadAndAppend(knex: Knex): Promise<void> {
  const account = applicationAccount()
  if (!account) return
  const [[row]] = await knex.raw('SELECT DATABASE() AS name') as [[{ name: string }]]
  for (const host of account.hosts) await knex.raw(`GRANT SELECT, INSERT ON \`${row.name}\`.* TO '${account.user}'@'${host}'`)
}

/** The application's account, read from DATABASE_URL; null where owner and application are one (then append-only rests on the code alone). */
function applicationAccount(): { user: string, hosts: string[] } | null {
  const application = process.env.DATABASE_URL
  const owner = process.env.DATABASE_MIGRATION_URL
  if (!application || !owner) return null
  const user = decodeURIComponent(new URL(application).username)
  if (user === decodeURIComponent(new URL(owner).username)) return null
  if (!/^\w{1,32}$/.test(user)) throw new Error(`The account name in DATABASE_URL may hold letters, digits and underscores only: ${user}`)
  return { user, hosts: (process.env.DATABASE_APP_HOSTS ?? '127.0.0.1,localhost').split(',') }
}

/** Columns that many tables share. */
export const ID = 'id BINARY(16) NOT NULL'
export const PROGRAMME = 'programme_id BINARY(16) NOT NULL'
/** Key that children point at with (programme_id, parent_id), so that a row cannot cross programmes. */
export const OWNED_KEY = 'PRIMARY KEY (id), UNIQUE KEY owned (programme_id, id), FOREIGN KEY (programme_id) REFERENCES programme (id)'
/** A foreign key inside one programme. */
export const within = (column: string, table: string): string => `FOREIGN KEY (programme_id, ${column}) REFERENCES ${table} (programme_id, id)`
export const person = (column: string): string => `FOREIGN KEY (${column}) REFERENCES person (id)`

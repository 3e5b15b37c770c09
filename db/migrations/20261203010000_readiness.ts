import type { Knex } from 'knex'
import { createTable, dropTables, ID, OWNED_KEY, person, PROGRAMME, within } from '../ddl'

/** What is known of an agent's readiness for use, version by version: a new row names the one it supersedes. It only grows. */
export async function up(knex: Knex): Promise<void> {
  await createTable(knex, 'readiness', `${ID}, ${PROGRAMME},
    complex_id BINARY(16) NOT NULL, version_no INT NOT NULL, supersedes BINARY(16) NULL, payload LONGTEXT NOT NULL, reason VARCHAR(1000) NOT NULL, created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY version (complex_id, version_no), UNIQUE KEY successor (supersedes), ${within('complex_id', 'complex')}, ${within('supersedes', 'readiness')}, ${person('created_by')}`)
}

export async function down(knex: Knex): Promise<void> {
  await dropTables(knex, 'readiness')
}

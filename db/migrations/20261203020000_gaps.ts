import type { Knex } from 'knex'
import { createTable, dropTables, ID, OWNED_KEY, person, PROGRAMME, within } from '../ddl'

/** Who is asked to close which gap, by when. The newest row of a gap counts; one without an assignee takes the task back. It only grows. */
export async function up(knex: Knex): Promise<void> {
  await createTable(knex, 'gap_assignment', `${ID}, ${PROGRAMME},
    complex_id BINARY(16) NOT NULL, gap_key VARCHAR(40) NOT NULL, seq INT NOT NULL, what VARCHAR(1000) NOT NULL, assignee BINARY(16) NULL, due DATE NULL, note VARCHAR(1000) NULL,
    created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY seq (complex_id, gap_key, seq), ${within('complex_id', 'complex')}, ${person('assignee')}, ${person('created_by')}`)
}

export async function down(knex: Knex): Promise<void> {
  await dropTables(knex, 'gap_assignment')
}

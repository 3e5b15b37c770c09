import type { Knex } from 'knex'
import { createTable, dropTables, ID, OWNED_KEY, person, PROGRAMME, within } from '../ddl'

/** Reference tubes of instruments with what was read of them, and tube sheets taken to the scanner. All of it only grows. */
export async function up(knex: Knex): Promise<void> {
  await knex.raw('ALTER TABLE tube MODIFY role ENUM(\'sample\',\'blank\',\'reference\') NOT NULL')
  await createTable(knex, 'reference_tube', `${ID}, ${PROGRAMME},
    instrument_id BINARY(16) NOT NULL, seq INT NOT NULL, label VARCHAR(120) NOT NULL, contents VARCHAR(200) NOT NULL, since DATETIME(6) NOT NULL, reason VARCHAR(1000) NOT NULL,
    created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY seq (instrument_id, seq), ${within('instrument_id', 'instrument')}, ${person('created_by')}`)
  await createTable(knex, 'reference_reading', `${ID}, ${PROGRAMME},
    series_id BINARY(16) NOT NULL, fit_id BINARY(16) NOT NULL, tube_no INT NOT NULL, label VARCHAR(120) NOT NULL, instrument VARCHAR(120) NOT NULL, kind VARCHAR(60) NOT NULL,
    quantity VARCHAR(60) NOT NULL, value_text VARCHAR(40) NOT NULL, se_text VARCHAR(40) NULL, temperature_K DOUBLE NULL, measured_on DATE NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY reading (fit_id, tube_no), KEY chart (programme_id, instrument, label), ${within('series_id', 'series')}, ${within('fit_id', 'fit')}`)
  await createTable(knex, 'tube_sheet', `${ID}, ${PROGRAMME},
    code VARCHAR(20) NOT NULL, kind VARCHAR(60) NOT NULL, title VARCHAR(200) NOT NULL, body LONGTEXT NOT NULL, created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY code (programme_id, code), ${person('created_by')}`)
}

export async function down(knex: Knex): Promise<void> {
  await dropTables(knex, 'tube_sheet', 'reference_reading', 'reference_tube')
}

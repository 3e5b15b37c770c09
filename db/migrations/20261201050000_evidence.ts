import type { Knex } from 'knex'
import { createTable, dropTables, grantMutable, ID, OWNED_KEY, person, PROGRAMME, within } from '../ddl'

export async function up(knex: Knex): Promise<void> {
  await createTable(knex, 'record', `${ID}, ${PROGRAMME},
    root_id BINARY(16) NOT NULL, version_no INT NOT NULL, replaces BINARY(16) NULL, kind VARCHAR(60) NOT NULL,
    complex_id BINARY(16) NULL, ligand_id BINARY(16) NULL, batch_id BINARY(16) NULL, payload LONGTEXT NOT NULL, payload_hash BINARY(32) NOT NULL,
    conditions LONGTEXT NOT NULL, source_id BINARY(16) NOT NULL, created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY version (root_id, version_no), UNIQUE KEY successor (replaces), KEY by_complex (complex_id), KEY by_ligand (ligand_id),
    ${within('complex_id', 'complex')}, ${within('ligand_id', 'ligand')}, ${within('batch_id', 'batch')}, ${within('source_id', 'source')},
    ${within('replaces', 'record')}, ${person('created_by')}`)
  await createTable(knex, 'evidence', `${ID}, ${PROGRAMME},
    quantity VARCHAR(60) NOT NULL, complex_id BINARY(16) NOT NULL, batch_id BINARY(16) NULL, fit_id BINARY(16) NULL, record_id BINARY(16) NULL, batch_version_id BINARY(16) NULL,
    value DOUBLE NOT NULL, value_kind CHAR(1) NOT NULL, unit VARCHAR(40) NOT NULL, payload LONGTEXT NOT NULL, payload_hash BINARY(32) NOT NULL, created_at DATETIME(6) NOT NULL,
    origin_id BINARY(16) AS (COALESCE(fit_id, record_id, batch_version_id)) PERSISTENT,
    ${OWNED_KEY}, UNIQUE KEY emitted (origin_id, complex_id, quantity), KEY by_complex (programme_id, complex_id, quantity),
    ${within('complex_id', 'complex')}, ${within('batch_id', 'batch')}, ${within('fit_id', 'fit')}, ${within('record_id', 'record')}, ${within('batch_version_id', 'batch_version')}`)
  await createTable(knex, 'check_event', `${ID}, ${PROGRAMME},
    fit_id BINARY(16) NULL, record_id BINARY(16) NULL, batch_version_id BINARY(16) NULL, subject_id BINARY(16) AS (COALESCE(fit_id, record_id, batch_version_id)) PERSISTENT, seq INT NOT NULL,
    event ENUM('waiting','firstSigned','signed','returned','recalled','withdrawn') NOT NULL, comment TEXT NOT NULL, person_id BINARY(16) NOT NULL, at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY step (subject_id, seq), ${within('fit_id', 'fit')}, ${within('record_id', 'record')}, ${within('batch_version_id', 'batch_version')}, ${person('person_id')}`)
  await createTable(knex, 'check_current', `
    subject_id BINARY(16) NOT NULL, ${PROGRAMME}, subject_kind ENUM('fit','record','batchVersion') NOT NULL, state ENUM('waiting','firstSigned','signed','returned','recalled','withdrawn') NOT NULL,
    seq INT NOT NULL, person_id BINARY(16) NOT NULL, since DATETIME(6) NOT NULL,
    PRIMARY KEY (subject_id), KEY queue (programme_id, state, since), FOREIGN KEY (programme_id) REFERENCES programme (id), ${person('person_id')}`)
  await grantMutable(knex, 'check_current')
}

export async function down(knex: Knex): Promise<void> {
  await dropTables(knex, 'check_current', 'check_event', 'evidence', 'record')
}

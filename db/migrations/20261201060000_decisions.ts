import type { Knex } from 'knex'
import { createTable, dropTables, ID, OWNED_KEY, person, PROGRAMME, within } from '../ddl'

export async function up(knex: Knex): Promise<void> {
  await createTable(knex, 'profile', `${ID}, ${PROGRAMME},
    name VARCHAR(120) NOT NULL, created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY name (programme_id, name), ${person('created_by')}`)
  await createTable(knex, 'profile_version', `${ID}, ${PROGRAMME},
    profile_id BINARY(16) NOT NULL, version_no INT NOT NULL, payload LONGTEXT NOT NULL, payload_hash BINARY(32) NOT NULL, note VARCHAR(500) NOT NULL,
    created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY version (profile_id, version_no), ${within('profile_id', 'profile')}, ${person('created_by')}`)
  await createTable(knex, 'decision', `${ID}, ${PROGRAMME},
    complex_id BINARY(16) NOT NULL, profile_version_id BINARY(16) NOT NULL, outcome ENUM('advance','hold','stop') NOT NULL, reasons TEXT NOT NULL,
    snapshot LONGTEXT NOT NULL, snapshot_hash BINARY(32) NOT NULL, supersedes BINARY(16) NULL,
    follows BINARY(16) AS (COALESCE(supersedes, complex_id)) PERSISTENT,
    person_id BINARY(16) NOT NULL, at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY successor (follows), KEY by_complex (complex_id, at),
    ${within('complex_id', 'complex')}, ${within('profile_version_id', 'profile_version')}, ${within('supersedes', 'decision')}, ${person('person_id')}`)
  await createTable(knex, 'decision_evidence', `${PROGRAMME},
    decision_id BINARY(16) NOT NULL, evidence_id BINARY(16) NOT NULL,
    PRIMARY KEY (decision_id, evidence_id), ${within('decision_id', 'decision')}, ${within('evidence_id', 'evidence')}`)
  await createTable(knex, 'notice', `${ID}, ${PROGRAMME},
    decision_id BINARY(16) NOT NULL, cause VARCHAR(120) NOT NULL, payload LONGTEXT NOT NULL, at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY once (decision_id, cause), ${within('decision_id', 'decision')}`)
  await createTable(knex, 'notice_ack', `${ID}, ${PROGRAMME},
    notice_id BINARY(16) NOT NULL, note VARCHAR(1000) NOT NULL, person_id BINARY(16) NOT NULL, at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY once (notice_id), ${within('notice_id', 'notice')}, ${person('person_id')}`)
}

export async function down(knex: Knex): Promise<void> {
  await dropTables(knex, 'notice_ack', 'notice', 'decision_evidence', 'decision', 'profile_version', 'profile')
}

import type { Knex } from 'knex'
import { createTable, dropTables, grantMutable, ID, person } from '../ddl'

/** Jobs, mail, idempotency and the audit chain: what unitOfWork writes beside the domain rows. */
export async function up(knex: Knex): Promise<void> {
  await createTable(knex, 'job', `${ID},
    programme_id BINARY(16) NULL, kind VARCHAR(60) NOT NULL, dedupe_key VARCHAR(190) NOT NULL, payload LONGTEXT NOT NULL,
    state ENUM('ready','running','done','parked','cancelled') NOT NULL DEFAULT 'ready',
    attempts INT NOT NULL DEFAULT 0, max_attempts INT NOT NULL, fence INT NOT NULL DEFAULT 0,
    run_after DATETIME(6) NOT NULL, lease_until DATETIME(6) NULL, progress DOUBLE NULL, error TEXT NULL,
    created_at DATETIME(6) NOT NULL, finished_at DATETIME(6) NULL,
    PRIMARY KEY (id), UNIQUE KEY dedupe (dedupe_key), KEY claim (state, run_after, id), KEY by_programme (programme_id, created_at),
    FOREIGN KEY (programme_id) REFERENCES programme (id)`)
  await grantMutable(knex, 'job', 'UPDATE, DELETE')
  await createTable(knex, 'mail', `${ID},
    programme_id BINARY(16) NULL, to_address VARCHAR(254) NOT NULL, subject VARCHAR(250) NOT NULL, body TEXT NOT NULL, template VARCHAR(60) NOT NULL,
    dedupe_key VARCHAR(190) NOT NULL, created_at DATETIME(6) NOT NULL,
    PRIMARY KEY (id), UNIQUE KEY dedupe (dedupe_key), KEY newest (created_at), FOREIGN KEY (programme_id) REFERENCES programme (id)`)
  await createTable(knex, 'mail_attempt', `${ID},
    mail_id BINARY(16) NOT NULL, at DATETIME(6) NOT NULL, succeeded BOOLEAN NOT NULL, message_id VARCHAR(250) NULL, error TEXT NULL,
    PRIMARY KEY (id), KEY by_mail (mail_id, at), FOREIGN KEY (mail_id) REFERENCES mail (id)`)
  await createTable(knex, 'idempotency', `
    person_id BINARY(16) NOT NULL, idempotency_key VARCHAR(80) NOT NULL, command VARCHAR(60) NOT NULL, request_hash BINARY(32) NOT NULL,
    response LONGTEXT NOT NULL, created_at DATETIME(6) NOT NULL,
    PRIMARY KEY (person_id, idempotency_key), KEY oldest (created_at), ${person('person_id')}`)
  await grantMutable(knex, 'idempotency', 'DELETE')
  await createTable(knex, 'audit', `${ID},
    chain_id BINARY(16) NOT NULL, seq INT NOT NULL, at DATETIME(6) NOT NULL, person_id BINARY(16) NULL, command VARCHAR(60) NOT NULL,
    subject VARCHAR(120) NOT NULL, payload LONGTEXT NOT NULL, previous_hash BINARY(32) NOT NULL, hash BINARY(32) NOT NULL,
    PRIMARY KEY (id), UNIQUE KEY link (chain_id, seq), ${person('person_id')}`)
  await createTable(knex, 'audit_head', `
    chain_id BINARY(16) NOT NULL, seq INT NOT NULL, hash BINARY(32) NOT NULL, PRIMARY KEY (chain_id)`)
  await grantMutable(knex, 'audit_head')
  await createTable(knex, 'process_beat', `
    name VARCHAR(80) NOT NULL, role ENUM('web','worker') NOT NULL, started_at DATETIME(6) NOT NULL, seen_at DATETIME(6) NOT NULL, engine LONGTEXT NOT NULL, PRIMARY KEY (name)`)
  await grantMutable(knex, 'process_beat', 'UPDATE, DELETE')
}

export async function down(knex: Knex): Promise<void> {
  await dropTables(knex, 'process_beat', 'audit_head', 'audit', 'idempotency', 'mail_attempt', 'mail', 'job')
}

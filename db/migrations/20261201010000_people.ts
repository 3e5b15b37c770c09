import type { Knex } from 'knex'
import { createTable, dropTables, grantMutable, grantReadAndAppend, ID, person, PROGRAMME } from '../ddl'

export async function up(knex: Knex): Promise<void> {
  await grantReadAndAppend(knex)
  await createTable(knex, 'person', `${ID},
    email_ci VARCHAR(254) CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_ci NOT NULL,
    name VARCHAR(120) NOT NULL,
    password_hash VARCHAR(255) NOT NULL,
    is_administrator BOOLEAN NOT NULL DEFAULT FALSE,
    is_demo BOOLEAN NOT NULL DEFAULT FALSE,
    state ENUM('active','removed') NOT NULL DEFAULT 'active',
    session_epoch INT NOT NULL DEFAULT 0,
    preferences LONGTEXT NOT NULL,
    created_at DATETIME(6) NOT NULL,
    PRIMARY KEY (id), UNIQUE KEY email (email_ci)`)
  await grantMutable(knex, 'person')
  await createTable(knex, 'session', `${ID},
    person_id BINARY(16) NOT NULL, epoch INT NOT NULL,
    created_at DATETIME(6) NOT NULL, expires_at DATETIME(6) NOT NULL, ended_at DATETIME(6) NULL,
    PRIMARY KEY (id), KEY by_person (person_id), ${person('person_id')}`)
  await grantMutable(knex, 'session', 'UPDATE, DELETE')
  await createTable(knex, 'sign_in_attempt', `${ID},
    at DATETIME(6) NOT NULL, account_key BINARY(32) NOT NULL, source VARCHAR(45) NOT NULL, succeeded BOOLEAN NOT NULL,
    PRIMARY KEY (id), KEY by_account (account_key, at), KEY by_source (source, at)`)
  await createTable(knex, 'one_time_token', `${ID},
    purpose ENUM('resetPassword','firstAdministrator') NOT NULL, token_hash BINARY(32) NOT NULL, person_id BINARY(16) NULL,
    created_at DATETIME(6) NOT NULL, expires_at DATETIME(6) NOT NULL, used_at DATETIME(6) NULL,
    PRIMARY KEY (id), UNIQUE KEY token (token_hash), ${person('person_id')}`)
  await grantMutable(knex, 'one_time_token')
  await createTable(knex, 'programme', `${ID},
    code VARCHAR(40) NOT NULL, name VARCHAR(120) NOT NULL, description TEXT NOT NULL, partner_sees_raw_files BOOLEAN NOT NULL DEFAULT FALSE,
    is_demo BOOLEAN NOT NULL DEFAULT FALSE, created_at DATETIME(6) NOT NULL,
    PRIMARY KEY (id), UNIQUE KEY code (code)`)
  await grantMutable(knex, 'programme')
  await createTable(knex, 'membership', `${PROGRAMME},
    person_id BINARY(16) NOT NULL, roles VARCHAR(120) NOT NULL,
    PRIMARY KEY (programme_id, person_id), FOREIGN KEY (programme_id) REFERENCES programme (id), ${person('person_id')}`)
  await grantMutable(knex, 'membership', 'UPDATE, DELETE')
  await createTable(knex, 'membership_event', `${ID}, ${PROGRAMME},
    person_id BINARY(16) NOT NULL, roles VARCHAR(120) NOT NULL, changed_by BINARY(16) NULL, at DATETIME(6) NOT NULL,
    PRIMARY KEY (id), KEY by_person (programme_id, person_id, at), FOREIGN KEY (programme_id) REFERENCES programme (id), ${person('person_id')}, ${person('changed_by')}`)
  await createTable(knex, 'invitation', `${ID},
    programme_id BINARY(16) NULL, email_ci VARCHAR(254) CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_ci NOT NULL,
    roles VARCHAR(120) NOT NULL, as_administrator BOOLEAN NOT NULL DEFAULT FALSE, token_hash BINARY(32) NOT NULL,
    state ENUM('open','accepted','revoked') NOT NULL DEFAULT 'open', invited_by BINARY(16) NULL,
    created_at DATETIME(6) NOT NULL, expires_at DATETIME(6) NOT NULL, ended_at DATETIME(6) NULL,
    PRIMARY KEY (id), UNIQUE KEY token (token_hash), KEY by_programme (programme_id, created_at),
    FOREIGN KEY (programme_id) REFERENCES programme (id), ${person('invited_by')}`)
  await grantMutable(knex, 'invitation')
}

export async function down(knex: Knex): Promise<void> {
  await dropTables(knex, 'invitation', 'membership_event', 'membership', 'programme', 'one_time_token', 'sign_in_attempt', 'session', 'person')
}

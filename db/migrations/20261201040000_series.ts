import type { Knex } from 'knex'
import { createTable, dropTables, grantMutable, ID, OWNED_KEY, person, PROGRAMME, within } from '../ddl'

export async function up(knex: Knex): Promise<void> {
  await createTable(knex, 'upload_staged', `${ID}, ${PROGRAMME},
    person_id BINARY(16) NOT NULL, file_name VARCHAR(255) NOT NULL, bytes INT NOT NULL, sha256 BINARY(32) NOT NULL, storage_key VARCHAR(200) NOT NULL,
    state ENUM('staged','confirmed','discarded','expired') NOT NULL DEFAULT 'staged', draft LONGTEXT NOT NULL,
    created_at DATETIME(6) NOT NULL, expires_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, KEY by_owner (person_id, state), ${person('person_id')}`)
  await grantMutable(knex, 'upload_staged', 'UPDATE, DELETE')
  await createTable(knex, 'upload', `${ID}, ${PROGRAMME},
    sha256 BINARY(32) NOT NULL, storage_key VARCHAR(200) NOT NULL, bytes INT NOT NULL, file_name VARCHAR(255) NOT NULL,
    staged_id BINARY(16) NOT NULL, uploaded_by BINARY(16) NOT NULL, uploaded_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY staged (staged_id), KEY by_hash (programme_id, sha256), ${person('uploaded_by')}`)
  await createTable(knex, 'series', `${ID}, ${PROGRAMME},
    kind VARCHAR(60) NOT NULL, kind_version INT NOT NULL, title VARCHAR(200) NOT NULL, complex_id BINARY(16) NOT NULL, batch_id BINARY(16) NOT NULL,
    upload_id BINARY(16) NOT NULL, conditions LONGTEXT NOT NULL, mapping LONGTEXT NOT NULL, input_hash BINARY(32) NOT NULL, replaces BINARY(16) NULL,
    created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY successor (replaces), KEY newest (programme_id, created_at), KEY by_complex (complex_id),
    ${within('complex_id', 'complex')}, ${within('batch_id', 'batch')}, ${within('upload_id', 'upload')}, ${within('replaces', 'series')}, ${person('created_by')}`)
  await createTable(knex, 'series_event', `${ID}, ${PROGRAMME},
    series_id BINARY(16) NOT NULL, seq INT NOT NULL, event ENUM('recorded','withdrawn','conditionsCorrected') NOT NULL, reason TEXT NOT NULL,
    person_id BINARY(16) NOT NULL, at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY step (series_id, seq), ${within('series_id', 'series')}, ${person('person_id')}`)
  await createTable(knex, 'tube', `${ID}, ${PROGRAMME},
    series_id BINARY(16) NOT NULL, tube_no INT NOT NULL, label VARCHAR(120) NOT NULL, role ENUM('sample','blank') NOT NULL,
    conc_mM DOUBLE NOT NULL, conc_se_mM DOUBLE NULL, place VARCHAR(200) NOT NULL, n_points INT NOT NULL, points LONGTEXT NOT NULL, points_hash BINARY(32) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY tube (series_id, tube_no), ${within('series_id', 'series')}`)
  await createTable(knex, 'fit', `${ID}, ${PROGRAMME},
    series_id BINARY(16) NOT NULL, version_no INT NOT NULL, parent_id BINARY(16) NULL, job_id BINARY(16) NOT NULL,
    model_id VARCHAR(60) NOT NULL, model_version INT NOT NULL, options LONGTEXT NOT NULL, exclusions_hash BINARY(32) NOT NULL, seed VARCHAR(80) NOT NULL,
    input_hash BINARY(32) NOT NULL, engine LONGTEXT NOT NULL, outcome ENUM('ok','refused') NOT NULL, result LONGTEXT NOT NULL, result_hash BINARY(32) NOT NULL,
    requested_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY version (series_id, version_no), UNIQUE KEY job (job_id),
    ${within('series_id', 'series')}, ${within('parent_id', 'fit')}, ${person('requested_by')}`)
  await createTable(knex, 'fit_input', `${PROGRAMME},
    fit_id BINARY(16) NOT NULL, tube_id BINARY(16) NOT NULL, points_hash BINARY(32) NOT NULL,
    PRIMARY KEY (fit_id, tube_id), ${within('fit_id', 'fit')}, ${within('tube_id', 'tube')}`)
  await createTable(knex, 'exclusion', `${ID}, ${PROGRAMME},
    fit_id BINARY(16) NOT NULL, tube_no INT NOT NULL, point_index INT NULL, reason VARCHAR(1000) NOT NULL, person_id BINARY(16) NOT NULL, at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, ${within('fit_id', 'fit')}, ${person('person_id')}`)
}

export async function down(knex: Knex): Promise<void> {
  await dropTables(knex, 'exclusion', 'fit_input', 'fit', 'tube', 'series_event', 'series', 'upload', 'upload_staged')
}

import type { Knex } from 'knex'
import { createTable, dropTables, grantMutable, ID, OWNED_KEY, person, PROGRAMME, within } from '../ddl'

/** What a thing is called is its identity and stays; what is known of it is a version, and versions are only added. */
const version = (parent: string) => `${ID}, ${PROGRAMME},
    ${parent}_id BINARY(16) NOT NULL, version_no INT NOT NULL, payload LONGTEXT NOT NULL, payload_hash BINARY(32) NOT NULL,
    created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY version (${parent}_id, version_no), ${within(`${parent}_id`, parent)}, ${person('created_by')}`

export async function up(knex: Knex): Promise<void> {
  await createTable(knex, 'source', `${ID}, ${PROGRAMME},
    citation VARCHAR(500) NOT NULL, doi VARCHAR(200) NULL, origin ENUM('paper','memory','own') NOT NULL, note TEXT NULL,
    created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL, ${OWNED_KEY}, ${person('created_by')}`)
  await createTable(knex, 'instrument', `${ID}, ${PROGRAMME},
    name VARCHAR(120) NOT NULL, b0_T DOUBLE NOT NULL, created_at DATETIME(6) NOT NULL, ${OWNED_KEY}, UNIQUE KEY name (programme_id, name)`)
  await createTable(knex, 'preset', `${ID}, ${PROGRAMME},
    name VARCHAR(120) NOT NULL, kind VARCHAR(60) NOT NULL, conditions LONGTEXT NOT NULL, created_by BINARY(16) NOT NULL, updated_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY name (programme_id, kind, name), ${person('created_by')}`)
  await grantMutable(knex, 'preset', 'UPDATE, DELETE')
  await createTable(knex, 'ligand', `${ID}, ${PROGRAMME},
    code VARCHAR(60) NOT NULL, created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY code (programme_id, code), ${person('created_by')}`)
  await createTable(knex, 'ligand_version', version('ligand'))
  await createTable(knex, 'complex', `${ID}, ${PROGRAMME},
    code VARCHAR(60) NOT NULL, ligand_id BINARY(16) NOT NULL, created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY code (programme_id, code), ${within('ligand_id', 'ligand')}, ${person('created_by')}`)
  await createTable(knex, 'complex_version', version('complex'))
  await createTable(knex, 'batch', `${ID}, ${PROGRAMME},
    complex_id BINARY(16) NOT NULL, lot VARCHAR(60) NOT NULL, created_by BINARY(16) NOT NULL, created_at DATETIME(6) NOT NULL,
    ${OWNED_KEY}, UNIQUE KEY lot (complex_id, lot), ${within('complex_id', 'complex')}, ${person('created_by')}`)
  await createTable(knex, 'batch_version', version('batch'))
}

export async function down(knex: Knex): Promise<void> {
  await dropTables(knex, 'batch_version', 'batch', 'complex_version', 'complex', 'ligand_version', 'ligand', 'preset', 'instrument', 'source')
}

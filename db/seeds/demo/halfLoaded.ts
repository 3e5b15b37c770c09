import type { Knex } from 'knex'
import { openDatabase } from '../../../server/platform/database'
import { countPersons, listDemoPersons } from '../../../server/queries/persons'
import { listProgrammes } from '../../../server/queries/programmes'

/** A load of the demonstration that was cut short: its programme is there, its accounts were never opened, so nobody can have signed in. */
export async function isHalfLoaded(db: Knex): Promise<boolean> {
  const programmes = await listProgrammes(db)
  if (programmes.length !== 1 || !programmes[0]!.isDemo) return false
  return (await listDemoPersons(db)).length === 0 && await countPersons(db) <= 7
}

/** The tables by which a half-loaded demonstration is told, emptied last: a clearing that is cut short itself is taken up again. */
const TOLD_BY = ['person', 'programme']

/** Empties every table, as the schema's owner, so that the load starts afresh. @throws Error when the owner's connection is not given */
export async function emptyHalfLoaded(migrationUrl: string | undefined): Promise<void> {
  if (!migrationUrl) throw new Error('The demonstration was left half loaded, and DATABASE_MIGRATION_URL is not set to clear it away.')
  const owner = openDatabase(migrationUrl, { maxConnections: 1 })
  try {
    const [tables] = await owner.raw('SELECT table_name AS name FROM information_schema.tables WHERE table_schema = DATABASE() AND table_type = \'BASE TABLE\' AND table_name NOT LIKE \'knex%\'') as [{ name: string }[]]
    await owner.raw('SET FOREIGN_KEY_CHECKS = 0')
    const names = [...tables.map(one => one.name).filter(name => !TOLD_BY.includes(name)), ...TOLD_BY]
    for (const name of names) await owner.raw('TRUNCATE TABLE ??', [name])
    await owner.raw('SET FOREIGN_KEY_CHECKS = 1')
  }
  finally {
    await owner.destroy()
  }
}

import knex from 'knex'
import config from '../knexfile'

/** Longest wait for another process that is migrating the same schema. */
const PATIENCE_S = 120

type Named = [Array<{ name: string, held: number | null }>, unknown]

/**
 * Brings the schema up to date. A named lock of the server, which ends with its connection, lets one process migrate at a time;
 * so a knex lock found while holding it was left by a process that was killed, and is freed.
 */
async function migrate(): Promise<void> {
  const guard = knex({ ...config, pool: { min: 1, max: 1, idleTimeoutMillis: 600_000 } })
  const database = knex(config)
  try {
    const [[row]] = await guard.raw<Named>('SELECT DATABASE() AS name, GET_LOCK(CONCAT(\'migrate \', LEFT(DATABASE(), 50)), ?) AS held', [PATIENCE_S])
    if (row?.held !== 1) throw new Error('Another process has been migrating this database for two minutes.')
    await database.migrate.forceFreeMigrationsLock()
    const [, done] = await database.migrate.latest() as [number, string[]]
    process.stdout.write(`${JSON.stringify({ migrated: done })}\n`)
  }
  finally {
    await database.destroy()
    await guard.destroy()
  }
}

await migrate().catch((error: unknown) => {
  process.stderr.write(`${error instanceof Error ? error.message : String(error)}\n`)
  process.exitCode = 1
})

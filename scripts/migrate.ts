import knex, { type Knex } from 'knex'
import config from '../knexfile'
import { explain } from './explain'

/** Longest wait for another process that is migrating the same schema. */
const PATIENCE_S = 120

type Locked = [Array<{ held: number | null }>, unknown]

/**
 * Brings the schema up to date. A named lock of the server, which ends with its connection, lets one process migrate at a time;
 * so a knex lock found while holding it was left by a process that was killed, and is freed.
 */
async function migrate(): Promise<string[]> {
  const guard = knex({ ...config, pool: { min: 1, max: 1, idleTimeoutMillis: 600_000 } })
  const database = knex(config)
  try {
    const [[row]] = await guard.raw<Locked>('SELECT GET_LOCK(CONCAT(\'migrate \', LEFT(DATABASE(), 50)), ?) AS held', [PATIENCE_S])
    if (row?.held !== 1) throw new Error('another process has been migrating it for two minutes')
    await database.migrate.forceFreeMigrationsLock()
    const [, done] = await database.migrate.latest() as [number, string[]]
    return done
  }
  finally {
    await database.destroy()
    await guard.destroy()
  }
}

/** The running product uses another account: a wrong one is better found here than on the first page. */
async function tryApplicationAccount(url: string): Promise<void> {
  const database: Knex = knex({ client: 'mysql2', connection: url, pool: { min: 0, max: 1 } })
  try {
    await database.raw('SELECT 1')
  }
  finally {
    await database.destroy()
  }
}

const urls = { DATABASE_MIGRATION_URL: process.env.DATABASE_MIGRATION_URL ?? '', DATABASE_URL: process.env.DATABASE_URL ?? '' }
const owner = urls.DATABASE_MIGRATION_URL === urls.DATABASE_URL ? 'DATABASE_URL' : 'DATABASE_MIGRATION_URL'
let trying: keyof typeof urls = owner
try {
  const migrated = await migrate()
  trying = 'DATABASE_URL'
  await tryApplicationAccount(urls.DATABASE_URL)
  process.stdout.write(`${JSON.stringify({ migrated })}\n`)
}
catch (error) {
  process.stdout.write(`${JSON.stringify({ problem: explain(error, { name: trying, url: urls[trying] }) })}\n`)
}

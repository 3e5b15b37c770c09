import { Failure } from './failure.mjs'
import { root } from './paths.mjs'
import { capture } from './processes.mjs'

/** Runs the migrations that this database has not seen. Returns their names. */
export async function migrate({ databaseUrl, migrationUrl }) {
  const env = { ...process.env, DATABASE_URL: databaseUrl, DATABASE_MIGRATION_URL: migrationUrl }
  const text = await capture(process.execPath, ['--import', 'tsx', 'scripts/migrate.ts'], { cwd: root, env })
  const { migrated, problem } = JSON.parse(text.trim().split('\n').at(-1))
  if (problem !== undefined) throw new Failure(problem)
  return migrated
}

import { join } from 'node:path'
import { connectionUrl, ensureSchema } from './mariadbAccounts.mjs'
import { runningMariadb, startMariadb, stopMariadb } from './mariadb.mjs'
import { hasBegunToStop, onStop } from './stopping.mjs'

const SCHEMA = 'lanthorn'

/**
 * The database that the settings name: the server of DATABASE_URL as it is, else a private one in the data folder, started here and stopped with this command.
 * @returns databaseUrl and migrationUrl: connections of the application's and the owner's account
 */
export async function openDatabase({ settings, secrets, say }) {
  if (settings.databaseUrl !== null) {
    say(`Using the database at ${new URL(settings.databaseUrl).host} (DATABASE_URL).`)
    return { databaseUrl: settings.databaseUrl, migrationUrl: settings.migrationUrl }
  }
  const options = { folder: join(settings.data, 'mariadb'), port: settings.databasePort, bufferPool: settings.bufferPool, say }
  onStop(() => stopMariadb(options.folder))
  const server = await startMariadb(options)
  if (!server.wasStarted) say('The database of an earlier start is still up; it is used again.')
  const owner = { user: 'lanthorn_owner', password: secrets.DATABASE_OWNER_PASSWORD }
  const application = { user: 'lanthorn_app', password: secrets.DATABASE_APP_PASSWORD }
  await ensureSchema(server, { schema: SCHEMA, owner, application })
  watch(options)
  return { databaseUrl: connectionUrl(server, SCHEMA, application), migrationUrl: connectionUrl(server, SCHEMA, owner) }
}

/** Starts the private server again when it ends without being asked; its port stays the one it had. */
function watch(options) {
  let isBusy = false
  const timer = setInterval(async () => {
    if (isBusy || hasBegunToStop() || runningMariadb(options.folder) !== null) return
    isBusy = true
    try {
      options.say('The database ended; it is started again.')
      await startMariadb({ ...options, isPortFixed: true })
    }
    catch (error) {
      console.error(error instanceof Error ? error.message : error)
    }
    finally {
      isBusy = false
    }
  }, 1_000)
  onStop(() => clearInterval(timer))
}

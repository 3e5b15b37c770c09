import { randomBytes } from 'node:crypto'
import { administer } from './mariadb.mjs'
import { connectionUrl, dropSchema, ensureSchema } from './mariadbAccounts.mjs'
import { migrate } from './migrations.mjs'
import { isAlive } from './processes.mjs'

const PREFIX = 'lanthorn_test_'

/** Makes an empty, migrated schema with two accounts of its own on a private server. `drop` takes all of it away again. */
export async function makeTestSchema(server) {
  await dropAbandoned(server)
  const parts = partsOf(`${process.pid}_${randomBytes(4).toString('hex')}`)
  const databaseUrl = connectionUrl(server, parts.schema, parts.application)
  const databaseMigrationUrl = connectionUrl(server, parts.schema, parts.owner)
  const drop = () => dropSchema(server, parts)
  try {
    await ensureSchema(server, parts)
    await migrate({ databaseUrl, migrationUrl: databaseMigrationUrl })
  }
  catch (error) {
    await drop()
    throw error
  }
  return { databaseUrl, databaseMigrationUrl, drop }
}

function partsOf(mark) {
  const account = role => ({ user: `${role}_${mark}`, password: randomBytes(12).toString('base64url') })
  return { schema: `${PREFIX}${mark}`, owner: account('owner'), application: account('app') }
}

/** A schema's name holds the process that made it; a run that was killed leaves one behind. */
async function dropAbandoned(server) {
  const names = (await administer(server, `SHOW DATABASES LIKE '${PREFIX.replaceAll('_', '\\_')}%';`)).split('\n').filter(name => name !== '')
  for (const mark of names.map(name => name.slice(PREFIX.length))) {
    if (/^\d+_/.test(mark) && !isAlive(Number.parseInt(mark, 10))) await dropSchema(server, partsOf(mark))
  }
}

import { randomBytes } from 'node:crypto'
import { connectionUrl, dropSchema, ensureSchema } from './mariadbAccounts.mjs'
import { migrate } from './migrations.mjs'

/** Makes an empty, migrated schema with two accounts of its own on a private server. `drop` takes all of it away again. */
export async function makeTestSchema(server) {
  const mark = randomBytes(4).toString('hex')
  const account = role => ({ user: `${role}_${mark}`, password: randomBytes(12).toString('base64url') })
  const parts = { schema: `lanthorn_test_${mark}`, owner: account('owner'), application: account('app') }
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

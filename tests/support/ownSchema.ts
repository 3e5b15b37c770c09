import { makeTestSchema } from '../../scripts/lib/testSchema.mjs'
import { openDatabase } from '../../server/platform/database'
import { makeDeps, type TestDeps } from './factory'
import { testServer } from './testServer'

export interface OwnDeps extends TestDeps { databaseUrl: string, databaseMigrationUrl: string }

/** Dependencies on a schema that no other test file sees: for tests of the whole queue, of an empty installation, or that spoil what they look at. */
export async function makeOwnDeps(): Promise<OwnDeps> {
  const schema = await makeTestSchema(await testServer())
  const db = openDatabase(schema.databaseUrl, { maxConnections: 8 })
  const deps = makeDeps({ db })
  return {
    ...deps,
    databaseUrl: schema.databaseUrl,
    databaseMigrationUrl: schema.databaseMigrationUrl,
    async close() {
      await deps.close()
      await db.destroy()
      await schema.drop()
    },
  }
}

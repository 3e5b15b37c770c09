import type { TestProject } from 'vitest/node'
import { testServer } from './testServer'
import { makeTestSchema } from '../../scripts/lib/testSchema.mjs'

declare module 'vitest' {
  export interface ProvidedContext {
    /** Connection of the application's account: reads and appends, changes only what a migration listed. */
    databaseUrl: string
    /** Connection of the schema's owner. */
    databaseMigrationUrl: string
  }
}

/** One fresh, migrated schema for a run of the server tests, on the private test MariaDB; dropped afterwards. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  const schema = await makeTestSchema(await testServer())
  project.provide('databaseUrl', schema.databaseUrl)
  project.provide('databaseMigrationUrl', schema.databaseMigrationUrl)
  return schema.drop
}

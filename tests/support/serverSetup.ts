import type { TestProject } from 'vitest/node'
import { startStack } from './stack'

declare module 'vitest' {
  export interface ProvidedContext {
    /** Address of the built product, with demo data loaded. */
    baseURL: string
    mailFolder: string
    storageFolder: string
  }
}

/** The built web server, worker and mail catcher on a fresh schema with the demo data, for the API and end-to-end tests. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  const stack = await startStack({ withDemo: true })
  for (const key of ['baseURL', 'databaseUrl', 'databaseMigrationUrl', 'mailFolder', 'storageFolder'] as const) project.provide(key, stack[key])
  return stack.stop
}

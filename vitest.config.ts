import { fileURLToPath } from 'node:url'
import { defineVitestProject } from '@nuxt/test-utils/config'
import { defineConfig } from 'vitest/config'

const at = (path: string) => fileURLToPath(new URL(path, import.meta.url))
const alias = { '#shared': at('./shared'), '~~': at('.'), '~': at('.') }

export default defineConfig({
  test: {
    coverage: { provider: 'v8', include: ['shared/**', 'server/**'] },
    projects: [
      { resolve: { alias }, test: { name: 'science', environment: 'node', include: ['tests/science/**/*.test.ts', 'tests/shared/**/*.test.ts', 'tests/meta/**/*.test.ts'] } },
      {
        resolve: { alias },
        test: { name: 'server', environment: 'node', include: ['tests/server/**/*.test.ts'], globalSetup: [at('./tests/support/databaseSetup.ts')], testTimeout: 30_000, hookTimeout: 60_000 },
      },
      {
        resolve: { alias },
        test: {
          name: 'api', environment: 'node', include: ['tests/api/**/*.test.ts'], globalSetup: [at('./tests/support/serverSetup.ts')],
          testTimeout: 60_000, hookTimeout: 180_000, fileParallelism: false,
        },
      },
      {
        resolve: { alias },
        test: {
          name: 'e2e', environment: 'node', include: ['tests/e2e/**/*.test.ts'], globalSetup: [at('./tests/support/serverSetup.ts')],
          testTimeout: 120_000, hookTimeout: 180_000, fileParallelism: false,
        },
      },
      await defineVitestProject({
        test: {
          name: 'components', environment: 'nuxt', include: ['tests/components/**/*.test.ts'],
          // Starting the application is the slow part, and these run beside a build.
          testTimeout: 30_000, hookTimeout: 120_000,
          environmentOptions: { nuxt: { rootDir: at('.'), domEnvironment: 'happy-dom' } },
        },
      }),
    ],
  },
})

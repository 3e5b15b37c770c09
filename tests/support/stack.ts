import { rmSync } from 'node:fs'
import { join } from 'node:path'
import { ensureBuild } from '../../scripts/lib/build.mjs'
import { ensureFirstPeople } from '../../scripts/lib/firstPeople.mjs'
import { builtParts, keepParts, openMail, partEnvironment } from '../../scripts/lib/parts.mjs'
import { fromRoot } from '../../scripts/lib/paths.mjs'
import { makeRunFolder } from '../../scripts/lib/runFolders.mjs'
import { ensureSecrets } from '../../scripts/lib/secrets.mjs'
import { makeTestSchema } from '../../scripts/lib/testSchema.mjs'
import { anyFreePort } from './ports'
import { testServer } from './testServer'

type Part = 'web' | 'worker'

/** The whole product on its own schema, ports, storage and mail folder. */
export interface Stack {
  baseURL: string
  databaseUrl: string
  databaseMigrationUrl: string
  /** Each caught message as <time>.json ({ receivedAt, from, to, messageId, subject, text, html }) and <time>.eml. */
  mailFolder: string
  storageFolder: string
  /** The environment its processes run in. */
  env: Record<string, string>
  /** Ends a process by force, as a power cut would; it comes back by itself. */
  kill: (part: Part) => void
  stop: () => Promise<void>
}

interface StackOptions {
  withDemo: boolean
  /** A MariaDB of its own; else the one that tests share. */
  server?: Awaited<ReturnType<typeof testServer>>
  /** Longest wait before a killed process comes back; else as npm start does it. */
  longestPause_ms?: number
}

/** Starts the built product for tests. LANTHORN_OUTPUT_DIR names a build to take as it is; otherwise one is made when sources changed. */
export async function startStack(options: StackOptions): Promise<Stack> {
  const undo: Array<() => unknown> = []
  const stop = async () => {
    for (const step of undo.splice(0).reverse()) await step()
  }
  try {
    return { ...await start(options, step => undo.push(step)), stop }
  }
  catch (error) {
    await stop()
    throw error
  }
}

async function start({ withDemo, server, longestPause_ms }: StackOptions, onStop: (step: () => unknown) => void): Promise<Omit<Stack, 'stop'>> {
  const settings = await makeSettings()
  onStop(() => rmSync(settings.data, { recursive: true, force: true }))
  const say = (line: string) => process.stderr.write(`${line}\n`)
  if (process.env.LANTHORN_OUTPUT_DIR === undefined) await ensureBuild(settings, say)
  const schema = await makeTestSchema(server ?? await testServer())
  onStop(schema.drop)
  const smtpUrl = await openMail({ settings, say, onStop })
  const env = partEnvironment({ settings, secrets: ensureSecrets(settings.data), databaseUrl: schema.databaseUrl, smtpUrl })
  if (withDemo) await ensureFirstPeople({ settings, env, migrationUrl: schema.databaseMigrationUrl, say })
  const { web, worker, address } = await keepParts({ settings, env, say, onStop, args: builtParts(settings), longestPause_ms })
  const kill = (part: Part) => {
    const { pid } = { web, worker }[part]
    if (pid !== null) process.kill(pid, 'SIGKILL')
  }
  const { databaseUrl, databaseMigrationUrl } = schema
  return { baseURL: address, databaseUrl, databaseMigrationUrl, mailFolder: settings.mail, storageFolder: settings.storage, env, kill }
}

async function makeSettings() {
  const data = makeRunFolder()
  return {
    port: await anyFreePort(), host: '127.0.0.1', data, storage: join(data, 'files'), mail: join(data, 'mail'), smtpUrl: null, wantsDemo: true,
    output: process.env.LANTHORN_OUTPUT_DIR ?? fromRoot('.output-try'), build: fromRoot('.nuxt-try'),
  }
}

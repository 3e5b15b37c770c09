import { banner } from './lib/banner.mjs'
import { stopChildren } from './lib/children.mjs'
import { openDatabase } from './lib/database.mjs'
import { ensureFirstPeople } from './lib/firstPeople.mjs'
import { migrate } from './lib/migrations.mjs'
import { ensureModules } from './lib/modules.mjs'
import { claimFolderAndPort } from './lib/oneStart.mjs'
import { keepParts, openMail, partEnvironment } from './lib/parts.mjs'
import { ensurePrepared } from './lib/prepared.mjs'
import { say } from './lib/say.mjs'
import { ensureSecrets } from './lib/secrets.mjs'
import { readSettings } from './lib/settings.mjs'
import { onStop, runUntilStopped, stopOnSignals } from './lib/stopping.mjs'

async function develop() {
  const settings = readSettings({ port: 3100, data: '.data/dev', output: '.output-dev', build: '.nuxt-dev', databasePort: 33_316 })
  stopOnSignals({ say })
  onStop(() => stopChildren())
  await claimFolderAndPort(settings)
  await ensureModules(say)
  await ensurePrepared(say)
  const secrets = ensureSecrets(settings.data)
  const { databaseUrl, migrationUrl } = await openDatabase({ settings, secrets, say })
  await migrate({ databaseUrl, migrationUrl })
  const smtpUrl = await openMail({ settings, say, onStop })
  const env = {
    ...partEnvironment({ settings, secrets, databaseUrl, smtpUrl }),
    NODE_ENV: 'development', LANTHORN_OUTPUT_DIR: settings.output, LANTHORN_BUILD_DIR: settings.build,
  }
  const people = await ensureFirstPeople({ settings, env, migrationUrl, say })
  const args = {
    web: ['node_modules/nuxt/bin/nuxt.mjs', 'dev', '--no-fork', '--host', settings.host, '--port', String(settings.port)],
    worker: ['node_modules/tsx/dist/cli.mjs', 'watch', '--clear-screen=false', 'server/worker/main.ts'],
  }
  const { address } = await keepParts({ settings, env, say, onStop, args })
  say(banner({ ...people, address, mailFolder: settings.smtpUrl === null ? settings.mail : null }))
}

await runUntilStopped(develop)

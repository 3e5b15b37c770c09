import { banner } from './lib/banner.mjs'
import { ensureBuild } from './lib/build.mjs'
import { stopChildren } from './lib/children.mjs'
import { openDatabase } from './lib/database.mjs'
import { ensureFirstPeople } from './lib/firstPeople.mjs'
import { migrate } from './lib/migrations.mjs'
import { ensureModules } from './lib/modules.mjs'
import { claimFolderAndPort, requirePort } from './lib/oneStart.mjs'
import { builtParts, keepParts, openMail, partEnvironment } from './lib/parts.mjs'
import { ensurePrepared } from './lib/prepared.mjs'
import { say } from './lib/say.mjs'
import { ensureSecrets } from './lib/secrets.mjs'
import { readSettings } from './lib/settings.mjs'
import { onStop, runUntilStopped, stopOnSignals } from './lib/stopping.mjs'

async function start() {
  const settings = readSettings({ port: 3000, data: '.data', output: '.output', build: '.nuxt-start', databasePort: 33_306 })
  stopOnSignals({ say })
  onStop(() => stopChildren())
  await claimFolderAndPort(settings)
  await ensureModules(say)
  await ensurePrepared(say)
  const secrets = ensureSecrets(settings.data)
  const { databaseUrl, migrationUrl } = await openDatabase({ settings, secrets, say })
  const migrated = await migrate({ databaseUrl, migrationUrl })
  if (migrated.length > 0) say(`Database brought up to date (${migrated.length} ${migrated.length === 1 ? 'change' : 'changes'}).`)
  await ensureBuild(settings, say)
  const smtpUrl = await openMail({ settings, say, onStop })
  const env = partEnvironment({ settings, secrets, databaseUrl, smtpUrl })
  const people = await ensureFirstPeople({ settings, env, migrationUrl, say })
  await requirePort(settings)
  const { address } = await keepParts({ settings, env, say, onStop, args: builtParts(settings) })
  say(banner({ ...people, address, mailFolder: settings.smtpUrl === null ? settings.mail : null }))
}

await runUntilStopped(start)

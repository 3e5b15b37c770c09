import { readFile } from 'node:fs/promises'
import { MEASUREMENTS } from '../shared/measurements/index'
import { loadDemo } from '../db/seeds/demo/loadDemo'
import { emptyHalfLoaded, isHalfLoaded } from '../db/seeds/demo/halfLoaded'
import { fixedClock } from '../server/platform/clock'
import { smtpMailer } from '../server/platform/mailer'
import { countPersons } from '../server/queries/persons'
import { listDemoAccounts } from '../server/services/listDemoAccounts'
import { closeDeps, useDeps } from '../server/utils/deps'

// Loads the demonstration into an empty database and prints { loaded, accounts } as JSON. --look: only says which demo accounts there are.
// What a load that was cut short has left is cleared away in either case: its accounts have a password that everybody knows.
const folder = new URL('../fixtures/demo/', import.meta.url)
const deps = useDeps()
const mailer = smtpMailer(process.env.SMTP_URL ?? 'smtp://127.0.0.1:1025', process.env.LANTHORN_MAIL_FROM ?? 'Lanthorn <lanthorn@localhost>')
try {
  const mayLoad = !process.argv.includes('--look')
  if (await isHalfLoaded(deps.db)) await emptyHalfLoaded(process.env.DATABASE_MIGRATION_URL)
  const loads = mayLoad && await countPersons(deps.db) === 0
  if (loads) {
    const worker = { ...deps, clock: fixedClock(new Date()), mailer, analyse: async (input: Parameters<(typeof MEASUREMENTS)[string]['analyse']>[0]) => MEASUREMENTS[input.kind]!.analyse(input) }
    await loadDemo(worker, async fileName => new Uint8Array(await readFile(new URL(fileName, folder))))
  }
  const { accounts, password } = await listDemoAccounts(deps)
  console.log(JSON.stringify({ loaded: loads, accounts: accounts.map(one => ({ ...one, password })) }))
}
finally {
  mailer.close()
  await closeDeps()
}

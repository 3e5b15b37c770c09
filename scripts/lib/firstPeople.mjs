import { Failure } from './failure.mjs'
import { runQuietly } from './children.mjs'
import { lastLines } from './processes.mjs'
import { isLoopback } from './settings.mjs'

/**
 * First start: demo data into an empty database, on loopback and unless LANTHORN_DEMO=0; otherwise a one-time link that makes the first administrator.
 * @param options.env environment of the parts
 * @param options.migrationUrl connection of the schema's owner, given to the demo script alone: it clears a load that was cut short
 * @returns demoAccounts (email, password and roles of each) and firstAdministratorLink (text or null)
 * @throws Failure when this would show demo accounts beyond loopback
 */
export async function ensureFirstPeople({ settings, env, migrationUrl, say }) {
  const mayLoad = settings.wantsDemo && isLoopback(settings.host)
  const demo = await runScript(['scripts/loadDemo.ts', ...(mayLoad ? [] : ['--look'])], { ...env, DATABASE_MIGRATION_URL: migrationUrl }, 'The demo data could not be loaded.')
  if (demo.accounts.length > 0 && !isLoopback(settings.host)) {
    throw new Failure(`This database holds demo accounts, whose passwords are known: it is served on loopback only, not on ${settings.host}. Use another LANTHORN_DATA with LANTHORN_DEMO=0.`)
  }
  if (demo.loaded) say('Demo data loaded into the empty database.')
  return { demoAccounts: demo.accounts, firstAdministratorLink: await firstLink(env) }
}

/** A one-time link where nobody has an account yet, else null. */
async function firstLink(env) {
  const { link } = await runScript(['scripts/firstAdministrator.ts'], env, 'The link for the first administrator could not be made.')
  return link
}

/** Runs a TypeScript entry whose last line of output is JSON. */
async function runScript(args, env, whatFailed) {
  const { code, text } = await runQuietly({ args: ['--import', 'tsx', ...args], env })
  if (code !== 0) throw new Failure(`${whatFailed} ${lastLines(text, 6)}`)
  return JSON.parse(text.trim().split('\n').at(-1))
}

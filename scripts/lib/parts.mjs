import { join } from 'node:path'
import { setTimeout as delay } from 'node:timers/promises'
import { Failure } from './failure.mjs'
import { keepRunning } from './keeper.mjs'
import { isPortFree, nextFreePort } from './ports.mjs'
import { hasBegunToStop } from './stopping.mjs'

/** Environment of the web and worker processes. */
export function partEnvironment({ settings, secrets, databaseUrl, smtpUrl }) {
  return {
    ...process.env,
    NODE_ENV: 'production',
    PORT: String(settings.port),
    HOST: settings.host,
    LANTHORN_ORIGIN: process.env.LANTHORN_ORIGIN || addressOf(settings),
    NITRO_PORT: String(settings.port),
    NITRO_HOST: settings.host,
    NITRO_SHUTDOWN_TIMEOUT: '5000',
    DATABASE_URL: databaseUrl,
    // Only migrations use the owner's account; the running product never holds it.
    DATABASE_MIGRATION_URL: '',
    SMTP_URL: smtpUrl,
    LANTHORN_DATA: settings.data,
    LANTHORN_STORAGE: settings.storage,
    LANTHORN_MAIL: settings.mail,
    LANTHORN_MAIL_CAUGHT: settings.smtpUrl === null ? '1' : '',
    NUXT_SESSION_PASSWORD: secrets.NUXT_SESSION_PASSWORD,
    NUXT_CSURF_ENCRYPT_SECRET: secrets.NUXT_CSURF_ENCRYPT_SECRET,
  }
}

/** The mail server to send through: the one of SMTP_URL, else a catcher on loopback that keeps each message as a file. */
export async function openMail({ settings, say, onStop }) {
  if (settings.smtpUrl !== null) return settings.smtpUrl
  const port = await nextFreePort(settings.port + 1_000 > 60_000 ? 20_000 : settings.port + 1_000)
  const command = () => ({ args: ['scripts/mailCatcher.mjs', String(port), settings.mail] })
  const kept = keepRunning({ name: 'mail catcher', command, log: logIn(settings, 'mail'), say })
  onStop(kept.stop)
  await untilBound(port, '127.0.0.1', kept, 'mail catcher')
  return `smtp://127.0.0.1:${port}`
}

/** The built web server and worker, as arguments of node. */
export function builtParts({ output }) {
  return { web: [join(output, 'server/index.mjs')], worker: [join(output, 'server/worker.mjs')] }
}

/**
 * Keeps web and worker running and waits until the web process answers.
 * @param run.args web and worker: what node is to run for each
 * @param run.longestPause_ms longest wait before one that ended starts again
 * @returns both as kept processes, and the address
 */
export async function keepParts({ settings, env, say, args, onStop, longestPause_ms }) {
  const worker = keepRunning({ name: 'worker', command: () => ({ args: args.worker, env }), log: logIn(settings, 'worker'), say, longestPause_ms })
  onStop(worker.stop)
  const web = keepRunning({ name: 'web server', command: () => ({ args: args.web, env }), log: logIn(settings, 'web'), say, longestPause_ms })
  onStop(web.stop)
  const address = addressOf(settings)
  await untilAnswering(address, web, logIn(settings, 'web'))
  return { web, worker, address }
}

function addressOf({ host, port }) {
  return `http://${host.includes(':') ? `[${host}]` : host}:${port}`
}

function logIn(settings, name) {
  return join(settings.data, 'logs', `${name}.log`)
}

async function untilAnswering(address, web, log) {
  const end = Date.now() + 120_000
  while (Date.now() < end && !hasBegunToStop()) {
    if (await answers(`${address}/api/health`)) return
    if (web.hasEnded) throw new Failure(`The web server ended before it answered; its log: ${log}`)
    await delay(150)
  }
  throw new Failure(`The web server does not answer on ${address}; its log: ${log}`)
}

async function answers(address) {
  try {
    const response = await fetch(address, { redirect: 'manual', signal: AbortSignal.timeout(20_000) })
    await response.arrayBuffer()
    return response.ok
  }
  catch (error) {
    if (error.name === 'TimeoutError' || error.cause?.code !== undefined) return false
    throw error
  }
}

async function untilBound(port, host, kept, name) {
  const end = Date.now() + 15_000
  while (Date.now() < end) {
    if (!await isPortFree(port, host)) return
    if (kept.hasEnded) break
    await delay(50)
  }
  throw new Failure(`The ${name} did not start on port ${port}.`)
}

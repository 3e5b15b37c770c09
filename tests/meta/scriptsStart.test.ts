import { spawn, type ChildProcess } from 'node:child_process'
import { once } from 'node:events'
import { readFileSync, rmSync } from 'node:fs'
import { createServer } from 'node:net'
import { join } from 'node:path'
import { setTimeout as delay } from 'node:timers/promises'
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest'
import { runningMariadb, startMariadb, stopMariadb } from '../../scripts/lib/mariadb.mjs'
import { connectionUrl, ensureSchema } from '../../scripts/lib/mariadbAccounts.mjs'
import { root } from '../../scripts/lib/paths.mjs'
import { anyFreePort, isPortFree } from '../../scripts/lib/ports.mjs'
import { commandOf } from '../../scripts/lib/processes.mjs'
import { makeRunFolder } from '../../scripts/lib/runFolders.mjs'

interface Started { child: ChildProcess, text: () => string, ended: Promise<number | null> }

let data: string
let port: number
const children: ChildProcess[] = []

function environment(more: Record<string, string> = {}): NodeJS.ProcessEnv {
  return { ...process.env, LANTHORN_DATA: data, PORT: String(port), LANTHORN_DEMO: '0', LANTHORN_DB_BUFFER: '64M', ...more }
}

/** npm start as a person would run it, in a data folder and on a port of the test. */
function start(env: Record<string, string> = {}): Started {
  const child = spawn(process.execPath, ['scripts/start.mjs'], {
    cwd: root, env: environment(env), stdio: ['ignore', 'pipe', 'pipe'],
  })
  children.push(child)
  let text = ''
  for (const stream of [child.stdout, child.stderr]) stream.setEncoding('utf8').on('data', (piece: string) => { text += piece })
  return { child, text: () => text, ended: once(child, 'close').then(([code]) => code as number | null) }
}

async function untilReady({ text, child }: Started): Promise<void> {
  while (!text().includes('Lanthorn is ready on')) {
    if (child.exitCode !== null) throw new Error(`It ended: ${text()}`)
    await delay(50)
  }
}

/** One that has ended and only waits to be collected does not count. */
const isRunning = (pid: number) => commandOf(pid) !== null
const health = async () => (await fetch(`http://127.0.0.1:${port}/api/health`)).status
const databasePid = () => runningMariadb(join(data, 'mariadb'))?.pid ?? null

async function untilHealthy(): Promise<void> {
  while (!await isListening() || await health() !== 200) await delay(100)
}

const isListening = async () => !await isPortFree(port)

/** Web, worker, mail catcher and database. */
function allPids(child: ChildProcess): number[] {
  const database = databasePid()
  if (database === null) throw new Error('The database does not run.')
  return [...new Set([...partPids(child), database])]
}

/** The processes that npm start itself started and that live. */
function partPids(child: ChildProcess): number[] {
  return readFileSync(`/proc/${child.pid}/task/${child.pid}/children`, 'utf8').trim().split(' ').filter(text => text !== '').map(Number)
}

beforeAll(async () => {
  data = makeRunFolder()
  port = await anyFreePort()
})
afterEach(async () => {
  for (const child of children.splice(0)) {
    if (child.exitCode === null && child.signalCode === null) {
      child.kill('SIGTERM')
      await once(child, 'close')
    }
  }
})
afterAll(async () => {
  await stopMariadb(join(data, 'mariadb'))
  rmSync(data, { recursive: true, force: true })
})

// They run the built product, so they belong to npm test, which builds it first.
describe.runIf(process.env.LANTHORN_OUTPUT_DIR !== undefined)('npm start', { timeout: 120_000 }, () => {
  it('comes up from an empty folder, prints a one-time link where there is no demo, and stops all it started [issue A.1]', async () => {
    const first = start()
    await untilReady(first)
    expect(await health()).toBe(200)
    expect(first.text()).toMatch(new RegExp(`first administrator, once: http://127\\.0\\.0\\.1:${port}/\\S+`))
    const pids = allPids(first.child)
    expect(pids.length).toBeGreaterThanOrEqual(4)
    first.child.kill('SIGINT')
    expect(await first.ended).toBe(0)
    expect(pids.filter(isRunning)).toEqual([])
  })

  it('starts a second time within seconds, and a second one beside it says who runs [issue A.1]', async () => {
    const begin = Date.now()
    const first = start()
    await untilReady(first)
    expect(Date.now() - begin).toBeLessThan(30_000)
    const second = start()
    expect(await second.ended).toBe(1)
    expect(second.text().trim()).toBe(`Lanthorn already runs with the data folder ${data} (process ${first.child.pid}). Stop it first, or set LANTHORN_DATA and PORT for a second one.`)
    expect(await health()).toBe(200)
  })

  it('after kill -9 leaves no web or worker behind and starts again on the same rows [issue A.1]', async () => {
    const first = start()
    await untilReady(first)
    const parts = partPids(first.child).filter(pid => pid !== databasePid())
    first.child.kill('SIGKILL')
    await first.ended
    while (parts.some(isRunning)) await delay(50)
    const second = start()
    await untilReady(second)
    expect(await health()).toBe(200)
    expect(second.text()).toContain('The database of an earlier start is still up')
    second.child.kill('SIGTERM')
    expect(await second.ended).toBe(0)
    expect(databasePid()).toBeNull()
  })

  it('stops all of it when only npm is told to stop, for npm does not pass a signal on', async () => {
    const npm = spawn('npm', ['start'], { cwd: root, env: environment(), stdio: ['ignore', 'pipe', 'pipe'] })
    children.push(npm)
    let text = ''
    npm.stdout.setEncoding('utf8').on('data', (piece: string) => { text += piece })
    while (!text.includes('Lanthorn is ready on')) await delay(50)
    const database = databasePid()
    npm.kill('SIGTERM')
    while (databasePid() !== null || await isListening()) await delay(100)
    expect(database).not.toBeNull()
  })

  it('brings web, worker and database back when each is killed', async () => {
    const first = start()
    await untilReady(first)
    for (const pid of allPids(first.child)) {
      process.kill(pid, 'SIGKILL')
      while (isRunning(pid)) await delay(20)
      await untilHealthy()
    }
    expect(first.text()).toContain('The worker ended (SIGKILL); it starts again')
    expect(first.text()).toContain('The web server ended (SIGKILL); it starts again')
    expect(first.text()).toContain('The database ended; it is started again.')
  })

  it('says in one line that the port is taken, and starts nothing [issue A.1]', async () => {
    const other = createServer().listen(port, '127.0.0.1')
    await once(other, 'listening')
    const refused = start()
    expect(await refused.ended).toBe(1)
    other.close()
    expect(refused.text().trim()).toBe(`Port ${port} on 127.0.0.1 is taken by another program. Choose one with PORT, for example: PORT=${port + 1} npm start`)
    expect(databasePid()).toBeNull()
  })

  it('uses the server of DATABASE_URL and leaves it running [issue A.1]', async () => {
    const folder = join(data, 'other')
    const server = await startMariadb({ folder, port: await anyFreePort(), bufferPool: '64M', isDurable: false, say: () => undefined })
    try {
      const [owner, application] = [{ user: 'their_owner', password: 'owner' }, { user: 'their_app', password: 'app' }]
      await ensureSchema(server, { schema: 'theirs', owner, application })
      const given = start({ DATABASE_URL: connectionUrl(server, 'theirs', application), DATABASE_MIGRATION_URL: connectionUrl(server, 'theirs', owner) })
      await untilReady(given)
      expect(await health()).toBe(200)
      expect(databasePid()).toBeNull()
      given.child.kill('SIGINT')
      expect(await given.ended).toBe(0)
      expect(runningMariadb(folder)?.pid).toBe(server.pid)
    }
    finally {
      await stopMariadb(folder)
    }
  })
})

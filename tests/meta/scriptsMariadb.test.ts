import { existsSync, mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { spawnSync } from 'node:child_process'
import { createServer } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { setTimeout as delay } from 'node:timers/promises'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { administer, runningMariadb, startMariadb, stopMariadb } from '../../scripts/lib/mariadb.mjs'
import { ensureSchema } from '../../scripts/lib/mariadbAccounts.mjs'
import { anyFreePort } from '../../scripts/lib/ports.mjs'
import { clearAbandonedRuns } from '../../scripts/lib/runFolders.mjs'
import { commandOf } from '../../scripts/lib/processes.mjs'
import { socketFor } from '../../scripts/lib/socketPath.mjs'

let folder: string
let said: string[]
const start = async (port?: number) => startMariadb({ folder, port: port ?? await anyFreePort(), bufferPool: '32M', isDurable: false, say: (line: string) => { said.push(line) } })

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'lanthorn-mariadb-'))
  said = []
})
afterEach(async () => {
  await stopMariadb(folder)
  rmSync(folder, { recursive: true, force: true })
})

async function untilGone(): Promise<void> {
  while (runningMariadb(folder) !== null) await delay(20)
}

describe('the private database server', { timeout: 60_000 }, () => {
  it('starts from nothing, is found running, keeps its rows and port through kill -9, and stops [issue A.1]', async () => {
    const first = await start()
    expect(first.wasStarted).toBe(true)
    await administer(first, 'CREATE DATABASE lanthorn; CREATE TABLE lanthorn.kept (n INT) ENGINE=InnoDB; INSERT INTO lanthorn.kept VALUES (7);')
    expect(await start()).toMatchObject({ pid: first.pid, wasStarted: false })
    process.kill(first.pid, 'SIGKILL')
    await untilGone()
    const second = await start()
    expect(second.port).toBe(first.port)
    expect((await administer(second, 'SELECT n FROM lanthorn.kept;')).trim()).toBe('7')
    expect(await stopMariadb(folder)).toBe('stopped')
    expect(await stopMariadb(folder)).toBe('gone')
  })

  it('is one server when two starts meet', async () => {
    const both = await Promise.all([start(), start()])
    expect(both[0].pid).toBe(both[1].pid)
    expect(both.filter(server => server.wasStarted)).toHaveLength(1)
  })

  it('compares text byte by byte, keeps UTC and refuses values out of range [architecture: Collation]', async () => {
    const server = await start()
    expect((await administer(server, 'SELECT @@collation_server, @@time_zone, @@bind_address, \'mM\' = \'MM\' COLLATE utf8mb4_bin, @@sql_mode LIKE \'%STRICT_ALL_TABLES%\';')).trim().split('\t'))
      .toEqual(['utf8mb4_bin', '+00:00', '127.0.0.1', '0', '1'])
  })

  it('sets a half-made folder aside and starts anew, also when an earlier making was cut short', async () => {
    mkdirSync(join(folder, 'data/mysql'), { recursive: true })
    writeFileSync(join(folder, 'data/ibdata1'), 'cut short')
    mkdirSync(join(folder, 'data.making/mysql'), { recursive: true })
    await start()
    const aside = readdirSync(folder).filter(name => name.startsWith('data.unfinished-'))
    expect(aside).toHaveLength(1)
    expect(readFileSync(join(folder, aside[0]!, 'ibdata1'), 'utf8')).toBe('cut short')
    expect(said.join('\n')).toContain('half made')
    expect(existsSync(join(folder, 'data.making'))).toBe(false)
  })

  it('never sets aside a folder that holds a schema of ours: says what the server said', async () => {
    mkdirSync(join(folder, 'data/lanthorn'), { recursive: true })
    await expect(start()).rejects.toThrow(/^The database did not start: .*whole log: /)
    expect(readdirSync(join(folder, 'data'))).toContain('lanthorn')
  })

  it('is not fooled by a pid file whose number belongs to another program', async () => {
    writeFileSync(join(folder, 'pid'), String(process.pid))
    expect(runningMariadb(folder)).toBeNull()
    expect((await start()).wasStarted).toBe(true)
  })

  it('takes the next free port when the one of last time is taken, and says so [issue A.1: port taken]', async () => {
    const other = createServer()
    const port = await new Promise<number>(resolve => other.listen(0, '127.0.0.1', () => resolve((other.address() as { port: number }).port)))
    writeFileSync(join(folder, 'port'), String(port))
    const server = await start()
    other.close()
    expect(server.port).toBeGreaterThan(port)
    expect(said).toEqual([`Port ${port} is taken: the database uses ${server.port}.`])
  })

  it('is stopped and cleared away when it belongs to a test run that was killed, and only then', async () => {
    const gone = spawnSync(process.execPath, ['-e', '']).pid
    const parent = join(folder, 'runs')
    const mine = join(parent, `${process.pid}-a`)
    const abandoned = join(parent, `${gone}-b`)
    for (const run of [mine, abandoned]) mkdirSync(run, { recursive: true })
    const server = await startMariadb({ folder: join(abandoned, 'mariadb'), port: await anyFreePort(), bufferPool: '32M', isDurable: false, say: () => undefined })
    await clearAbandonedRuns(parent)
    expect(commandOf(server.pid)).toBeNull()
    expect(readdirSync(parent)).toEqual([`${process.pid}-a`])
  })

  it('gives the application no rights of its own; the owner passes them on, table by table [architecture: Two accounts]', async () => {
    const server = await start()
    await ensureSchema(server, { schema: 'lanthorn', owner: { user: 'lanthorn_owner', password: 'owner\'s \\ word' }, application: { user: 'lanthorn_app', password: 'x' } })
    const grants = async (who: string) => (await administer(server, `SHOW GRANTS FOR ${who};`)).replaceAll(/ IDENTIFIED BY.*/g, '').trim().split('\n')
    expect(await grants('lanthorn_app@localhost')).toEqual(['GRANT USAGE ON *.* TO `lanthorn_app`@`localhost`'])
    expect((await grants('\'lanthorn_owner\'@\'127.0.0.1\''))[1]).toMatch(/^GRANT ALL PRIVILEGES ON `lanthorn`\.\* .* WITH GRANT OPTION$/)
  })
})

describe('the socket', () => {
  it('stays short however deep the folder lies: the system takes about 107 bytes', () => {
    expect(socketFor('/srv/lanthorn/mariadb')).toBe('/srv/lanthorn/mariadb/mariadb.sock')
    const deep = socketFor(`/srv/${'deep/'.repeat(40)}mariadb`)
    expect(Buffer.byteLength(deep)).toBeLessThanOrEqual(100)
    rmSync(join(deep, '..'), { recursive: true, force: true })
  })
})

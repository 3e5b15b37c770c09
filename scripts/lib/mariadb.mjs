import { spawn } from 'node:child_process'
import { closeSync, existsSync, mkdirSync, openSync, renameSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as delay } from 'node:timers/promises'
import { Failure } from './failure.mjs'
import { readIfThere } from './files.mjs'
import { withLock } from './locks.mjs'
import { readyDataFolder } from './mariadbFolder.mjs'
import { requireProgram } from './packages.mjs'
import { isPortFree, nextFreePort } from './ports.mjs'
import { capture, commandOf, lastLines, stopProcess, untilLetGo } from './processes.mjs'
import { socketFor } from './socketPath.mjs'

/**
 * Starts a private MariaDB on loopback, or finds it already running: its own data folder, port and socket, no option files read.
 * @param options.folder holds data/, the log, the pid and the port; made when missing
 * @param options.port preferred port; the one used last time wins, and the next free one is taken when it is not free
 * @param options.isPortFixed fails instead of taking another port than last time
 * @param options.bufferPool size of the buffer pool, as MariaDB writes it (256M, 1G)
 * @param options.isDurable false gives up the flush at each commit (tests): survives a killed server, not a power cut
 * @returns folder, port, socket, pid and wasStarted (false: it was up already)
 */
export function startMariadb(options) {
  mkdirSync(options.folder, { recursive: true, mode: 0o700 })
  return withLock(join(options.folder, 'starting.lock'), () => startLocked(options))
}

/** Stops the server of this folder, if one runs. */
export async function stopMariadb(folder) {
  const pid = runningPid(folder)
  if (pid === null) return 'gone'
  return await stopProcess(pid, { patience_ms: 60_000 })
}

/** The running server of this folder, or null. */
export function runningMariadb(folder) {
  const pid = runningPid(folder)
  return pid === null ? null : { folder, pid, port: Number(readIfThere(join(folder, 'port'))), socket: socketFor(folder), wasStarted: false }
}

/** Runs statements as the server's own administrator: the account of the operating system that started it, over the socket. */
export async function administer(server, sql) {
  const client = await requireProgram({ names: ['mariadb', 'mysql'], packageName: 'mariadb-client', say: () => {} })
  return await capture(client, ['--no-defaults', '--protocol=socket', `--socket=${server.socket}`, '--user=root', '--default-character-set=utf8mb4', '--batch', '--skip-column-names'], { input: sql })
}

async function startLocked({ folder, port, bufferPool, isDurable = true, isPortFixed = false, say }) {
  const running = runningMariadb(folder)
  // One that is just dying may still look alive; then it is started again like any that was killed.
  if (running !== null && await untilAnswering(running) === 'ready') return running
  const killed = recordedPid(folder)
  if (killed !== null) await untilLetGo(killed)
  const program = await requireProgram({ names: ['mariadbd', 'mysqld'], packageName: 'mariadb-server', say })
  await readyDataFolder({ folder, say })
  const wanted = Number(readIfThere(join(folder, 'port')) ?? port)
  for (let first = wanted; ; first += 1) {
    const chosen = await nextFreePort(first)
    if (chosen !== wanted && isPortFixed) throw new Failure(`The database cannot start again: its port ${wanted} is taken.`)
    if (chosen !== wanted) say(`Port ${wanted} is taken: the database uses ${chosen}.`)
    const server = launch({ program, folder, port: chosen, bufferPool, isDurable })
    const outcome = await untilAnswering(server)
    if (outcome === 'ready') return server
    // Somebody took the port between the look and the bind: try the next one.
    if (await isPortFree(chosen)) throw new Failure(`The database did not start: ${outcome} (whole log: ${logOf(folder)})`)
  }
}

function launch({ program, folder, port, bufferPool, isDurable }) {
  const socket = socketFor(folder)
  rmSync(socket, { force: true })
  const log = logOf(folder)
  if (existsSync(log)) renameSync(log, `${log}.old`)
  const output = openSync(log, 'a', 0o600)
  // A session of its own: Ctrl-C in the terminal reaches the starter, which stops the database last.
  const child = spawn(program, serverOptions({ folder, port, socket, bufferPool, isDurable }), { detached: true, stdio: ['ignore', output, output] })
  closeSync(output)
  child.unref()
  writeFileSync(join(folder, 'port'), String(port))
  writeFileSync(join(folder, 'pid'), String(child.pid))
  return { folder, port, socket, pid: child.pid, wasStarted: true }
}

function serverOptions({ folder, port, socket, bufferPool, isDurable }) {
  return [
    '--no-defaults', `--datadir=${join(folder, 'data')}`, `--port=${port}`, `--socket=${socket}`, '--bind-address=127.0.0.1',
    `--pid-file=${join(folder, 'mariadb.pid')}`, `--tmpdir=${join(folder, 'tmp')}`,
    ...(process.getuid?.() === 0 ? ['--user=root'] : []),
    '--skip-name-resolve', '--skip-log-bin', '--skip-symbolic-links', '--local-infile=0',
    '--character-set-server=utf8mb4', '--collation-server=utf8mb4_bin', '--default-time-zone=+00:00',
    '--sql-mode=STRICT_ALL_TABLES,NO_ENGINE_SUBSTITUTION,ERROR_FOR_DIVISION_BY_ZERO,NO_ZERO_DATE,NO_ZERO_IN_DATE',
    '--max-allowed-packet=64M', '--max-connections=120', '--innodb-log-file-size=64M', `--innodb-buffer-pool-size=${bufferPool}`,
    ...(isDurable ? [] : ['--innodb-flush-log-at-trx-commit=2', '--skip-innodb-doublewrite']),
  ]
}

function logOf(folder) {
  return join(folder, 'mariadb.log')
}

/** 'ready', or the last words of the log once the server has ended. */
async function untilAnswering(server) {
  const end = Date.now() + 120_000
  while (Date.now() < end) {
    if (await answers(server)) return 'ready'
    if (runningPid(server.folder) === null) return lastWords(server.folder)
    await delay(100)
  }
  throw new Failure(`The database does not answer on ${server.socket} after two minutes (log: ${logOf(server.folder)}).`)
}

async function answers(server) {
  if (!existsSync(server.socket)) return false
  try {
    await administer(server, 'SELECT 1;')
    return true
  }
  catch (error) {
    if (error instanceof Failure) return false
    throw error
  }
}

function lastWords(folder) {
  const log = readIfThere(logOf(folder)) ?? ''
  const errors = log.split('\n').filter(line => line.includes('[ERROR]')).map(line => line.replace(/^.*\[ERROR\]\s*/, ''))
  return errors.length > 0 ? lastLines(errors.slice(0, 2).join('\n'), 2) : lastLines(log, 2)
}

/** A pid counts only while it is a server of this very folder: numbers are used again. */
function runningPid(folder) {
  const pid = recordedPid(folder)
  if (pid === null) return null
  const command = commandOf(pid)
  return command !== null && command.includes(`--datadir=${join(folder, 'data')}`) ? pid : null
}

function recordedPid(folder) {
  const pid = Number(readIfThere(join(folder, 'pid')))
  return Number.isInteger(pid) && pid > 0 ? pid : null
}

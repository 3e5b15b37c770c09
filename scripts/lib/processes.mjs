import { spawn } from 'node:child_process'
import { readdirSync, readFileSync } from 'node:fs'
import { setTimeout as delay } from 'node:timers/promises'
import { Failure } from './failure.mjs'

/** Runs a program to its end and returns what it wrote. Rejects with a Failure naming its last words when it fails. */
export async function capture(program, args, { input, ...options } = {}) {
  const { code, stdout, stderr } = await new Promise((done, fail) => {
    const child = spawn(program, args, { ...options, stdio: ['pipe', 'pipe', 'pipe'] })
    const texts = { stdout: '', stderr: '' }
    for (const name of ['stdout', 'stderr']) child[name].setEncoding('utf8').on('data', (text) => { texts[name] += text })
    child.once('error', fail)
    child.once('close', code => done({ code, ...texts }))
    // A program that ends before it has read everything closes the pipe; its exit code says what went wrong.
    child.stdin.once('error', error => error.code === 'EPIPE' ? undefined : fail(error))
    child.stdin.end(input ?? '')
  })
  if (code !== 0) throw new Failure(`${program} failed (${code}): ${lastLines(stderr || stdout, 3)}`)
  return stdout
}

export function lastLines(text, count) {
  return text.trim().split('\n').slice(-count).map(line => line.trim()).join(' / ')
}

export function isAlive(pid) {
  try {
    process.kill(pid, 0)
    return true
  }
  catch (error) {
    if (error.code === 'EPERM') return true
    if (error.code === 'ESRCH') return false
    throw error
  }
}

/**
 * The words a process was started with; null when it has gone or only waits to be collected.
 * Empty while it is dying: it no longer answers, but may still hold its ports and file locks for a moment.
 */
export function commandOf(pid) {
  try {
    const state = readFileSync(`/proc/${pid}/stat`, 'utf8').replace(/^.*\) /s, '').charAt(0)
    // A killed program of several threads is a zombie by its first thread while the others still let go.
    if (state === 'X' || (state === 'Z' && readdirSync(`/proc/${pid}/task`).length === 1)) return null
    return readFileSync(`/proc/${pid}/cmdline`, 'utf8').split('\0').filter(word => word !== '')
  }
  catch (error) {
    if (error.code === 'ENOENT' || error.code === 'ESRCH') return null
    throw error
  }
}

/** Asks a process to stop, waits, and ends it by force after `patience_ms`. Returns how it went. */
export async function stopProcess(pid, { signal = 'SIGTERM', patience_ms = 10_000 } = {}) {
  if (!isRunning(pid)) return 'gone'
  send(pid, signal)
  if (await untilGone(pid, patience_ms)) return 'stopped'
  send(pid, 'SIGKILL')
  await untilGone(pid, 5_000)
  return 'killed'
}

function isRunning(pid) {
  return isAlive(pid) && commandOf(pid) !== null
}

function send(pid, signal) {
  try {
    process.kill(pid, signal)
  }
  catch (error) {
    if (error.code !== 'ESRCH') throw error
  }
}

/** Waits until a process that has been killed has let go of what it held. */
export async function untilLetGo(pid) {
  while (commandOf(pid)?.length === 0) await delay(20)
}

async function untilGone(pid, patience_ms) {
  const end = Date.now() + patience_ms
  while (Date.now() < end) {
    if (!isRunning(pid)) return true
    await delay(50)
  }
  return !isRunning(pid)
}

import { spawn } from 'node:child_process'
import { join } from 'node:path'
import { root } from './paths.mjs'
import { stopProcess } from './processes.mjs'

const running = new Set()
const PRELOAD = join(root, 'scripts/lib/endWithParent.mjs')

/**
 * Starts a program of ours. It is listed, so that stopping us stops it, and a Node program also ends by itself when we are killed.
 * It has a session of its own: Ctrl-C in the terminal reaches only us, and we stop what we started in order.
 */
export function startChild({ program = process.execPath, args, env = process.env, cwd = root, output = 'inherit' }) {
  const isNode = program === process.execPath
  const child = spawn(program, isNode ? ['--import', PRELOAD, ...args] : args, {
    cwd, env, detached: true, stdio: ['ignore', output, output, ...(isNode ? ['ipc'] : [])],
  })
  running.add(child)
  const forget = () => running.delete(child)
  child.once('exit', forget)
  child.once('error', forget)
  return child
}

/** Runs a program of ours to its end. Resolves with its exit code, or the signal that ended it. */
export function runChild(options) {
  return new Promise((done, fail) => {
    const child = startChild(options)
    child.once('error', fail)
    child.once('exit', (code, signal) => done(code ?? signal))
  })
}

/** Runs a program of ours to its end and keeps what it wrote. */
export function runQuietly(options) {
  return new Promise((done, fail) => {
    const child = startChild({ ...options, output: 'pipe' })
    let text = ''
    for (const stream of [child.stdout, child.stderr]) stream.setEncoding('utf8').on('data', (piece) => { text += piece })
    child.once('error', fail)
    child.once('close', (code, signal) => done({ code: code ?? signal, text }))
  })
}

export async function stopChild(child, patience_ms = 10_000) {
  if (child.pid === undefined || child.exitCode !== null || child.signalCode !== null) return
  await stopProcess(child.pid, { patience_ms })
}

/** Stops everything still running, at the same time. */
export async function stopChildren(patience_ms) {
  await Promise.all([...running].map(child => stopChild(child, patience_ms)))
}

import { linkSync, mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { dirname } from 'node:path'
import { setTimeout as delay } from 'node:timers/promises'
import { commandOf } from './processes.mjs'

/**
 * Takes a lock file that names the process holding it. A lock whose holder has gone, or whose number now belongs to another program, is taken over.
 * @returns null when taken, else the pid of the holder
 */
export function takeLock(path) {
  mkdirSync(dirname(path), { recursive: true })
  // Written whole under another name first: a reader never sees a lock without its holder.
  const mine = `${path}.${process.pid}.${lockNumber += 1}`
  writeFileSync(mine, JSON.stringify({ pid: process.pid, command: commandOf(process.pid) }))
  try {
    return claim(path, mine)
  }
  finally {
    rmSync(mine, { force: true })
  }
}

let lockNumber = 0

function claim(path, mine) {
  for (let attempt = 0; attempt < 5; attempt += 1) {
    try {
      linkSync(mine, path)
      return null
    }
    catch (error) {
      if (error.code !== 'EEXIST') throw error
      const holder = livingHolder(path)
      if (holder !== null) return holder
      rmSync(path, { force: true })
    }
  }
  throw new Error(`Cannot take the lock ${path}.`)
}

export function releaseLock(path) {
  rmSync(path, { force: true })
}

/** Runs `work` while holding the lock; waits for another holder up to `patience_ms`. */
export async function withLock(path, work, patience_ms = 60_000) {
  const end = Date.now() + patience_ms
  for (let holder = takeLock(path); holder !== null; holder = takeLock(path)) {
    if (Date.now() > end) throw new Error(`Process ${holder} has held ${path} for too long.`)
    await delay(100)
  }
  try {
    return await work()
  }
  finally {
    releaseLock(path)
  }
}

function livingHolder(path) {
  let text
  try {
    text = readFileSync(path, 'utf8')
  }
  catch (error) {
    if (error.code === 'ENOENT') return null
    throw error
  }
  const held = parseHolder(text)
  if (held === null) return null
  const command = commandOf(held.pid)
  return command !== null && command.join('\0') === held.command.join('\0') ? held.pid : null
}

/** A lock cut short by a crash holds no readable text, so nobody holds it. */
function parseHolder(text) {
  try {
    const { pid, command } = JSON.parse(text)
    return Number.isInteger(pid) && Array.isArray(command) ? { pid, command } : null
  }
  catch (error) {
    if (error instanceof SyntaxError) return null
    throw error
  }
}

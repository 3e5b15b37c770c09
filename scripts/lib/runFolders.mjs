import { existsSync, mkdirSync, mkdtempSync, readdirSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { stopMariadb } from './mariadb.mjs'
import { fromRoot } from './paths.mjs'
import { isAlive } from './processes.mjs'

const PARENT = fromRoot('.data/test-runs')

/** A folder of this process alone; its name holds the process, so that what a killed run left can be told apart. */
export function makeRunFolder(parent = PARENT) {
  mkdirSync(parent, { recursive: true, mode: 0o700 })
  return mkdtempSync(join(parent, `${process.pid}-`))
}

/** Stops the servers and removes the folders of runs that were killed. */
export async function clearAbandonedRuns(parent = PARENT) {
  if (!existsSync(parent)) return
  for (const name of readdirSync(parent)) {
    if (isAlive(Number.parseInt(name, 10))) continue
    for (const folder of [join(parent, name, 'mariadb'), join(parent, name)]) await stopMariadb(folder)
    rmSync(join(parent, name), { recursive: true, force: true })
  }
}

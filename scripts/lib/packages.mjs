import { accessSync, constants, existsSync } from 'node:fs'
import { delimiter, join } from 'node:path'
import { Failure } from './failure.mjs'
import { capture } from './processes.mjs'

const SYSTEM_FOLDERS = ['/usr/sbin', '/usr/bin', '/usr/local/sbin', '/usr/local/bin']

/** Where a program lies, on PATH or in the system's folders, or null. */
export function findProgram(...names) {
  const folders = [...(process.env.PATH ?? '').split(delimiter), ...SYSTEM_FOLDERS].filter(folder => folder !== '')
  for (const name of names) {
    const found = folders.map(folder => join(folder, name)).find(isExecutable)
    if (found !== undefined) return found
  }
  return null
}

function isExecutable(path) {
  if (!existsSync(path)) return false
  try {
    accessSync(path, constants.X_OK)
    return true
  }
  catch (error) {
    if (error.code === 'EACCES') return false
    throw error
  }
}

/**
 * The program, installed from Debian's packages first when it is missing.
 * @throws Failure naming the package when this account may not install, or when apt-get is not there
 */
export async function requireProgram({ names, packageName, say }) {
  const there = findProgram(...names)
  if (there !== null) return there
  const apt = findProgram('apt-get')
  if (process.getuid?.() !== 0 || apt === null) {
    throw new Failure(`${names[0]} is missing. Install the package ${packageName}, for example: sudo apt-get install ${packageName}`)
  }
  say(`Installing ${packageName} from the system's packages ...`)
  await aptInstall(apt, packageName)
  const installed = findProgram(...names)
  if (installed === null) throw new Failure(`The package ${packageName} was installed, but ${names[0]} is still not there.`)
  return installed
}

async function aptInstall(apt, packageName) {
  const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' }
  const install = () => capture(apt, ['install', '-y', '--no-install-recommends', packageName], { env })
  try {
    await install()
  }
  catch (error) {
    if (!(error instanceof Failure)) throw error
    // A fresh image has no package lists, or stale ones.
    await capture(apt, ['update'], { env })
    await install()
  }
}

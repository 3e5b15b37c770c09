import { join } from 'node:path'
import { Failure } from './failure.mjs'
import { readIfThere } from './files.mjs'
import { withLock } from './locks.mjs'
import { fromRoot, nodeModules, root } from './paths.mjs'
import { runChild } from './children.mjs'

/** Installs the packages of the lock file when node_modules is missing, unfinished or of another lock. */
export async function ensureModules(say) {
  if (areModulesCurrent()) return
  await withLock(fromRoot('.data/install.lock'), async () => {
    if (areModulesCurrent()) return
    say('Installing packages (npm ci); the first time takes a minute or two ...')
    const code = await runChild({ program: 'npm', args: ['ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel=error'], cwd: root })
    if (code !== 0) throw new Failure(`npm ci failed (${code}); its own words are above.`)
    if (!areModulesCurrent()) throw new Failure('npm ci ended well, but node_modules does not hold what package-lock.json names.')
  }, 900_000)
}

/** npm writes its record of what it installed last of all, so an interrupted installation has none. */
export function areModulesCurrent(folder = nodeModules, lockPath = join(root, 'package-lock.json')) {
  const record = readIfThere(join(folder, '.package-lock.json'))
  const lock = readIfThere(lockPath)
  if (lock === null) throw new Failure(`${lockPath} is missing: this is not a whole checkout.`)
  if (record === null) return false
  const installed = JSON.parse(record).packages
  return Object.entries(JSON.parse(lock).packages).every(([path, wanted]) =>
    path === '' || isOptional(wanted) || installed[path]?.version === wanted.version)
}

/** Packages for other systems are in the lock but not in the folder. */
function isOptional(entry) {
  return entry.optional === true || entry.devOptional === true
}

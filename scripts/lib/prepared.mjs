import { existsSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { runQuietly } from './children.mjs'
import { Failure } from './failure.mjs'
import { withLock } from './locks.mjs'
import { fromRoot } from './paths.mjs'
import { lastLines } from './processes.mjs'

const PARTS = ['app', 'server', 'shared', 'node'].map(part => `tsconfig.${part}.json`)

/**
 * Makes .nuxt when it is missing. The checkout's tsconfig.json and lint rules point into it, so every build and test reads it, whatever folder it builds in;
 * therefore nothing here ever empties it while another command may be at work.
 */
export async function ensurePrepared(say) {
  const isThere = () => [...PARTS, 'eslint.config.mjs'].every(file => existsSync(fromRoot(join('.nuxt', file))))
  if (isThere()) return
  await withLock(fromRoot('.data/prepare.lock'), async () => {
    if (isThere()) return
    say('Preparing types ...')
    await prepare(fromRoot('.nuxt'))
  }, 300_000)
}

/** Type declarations of the present sources in a folder of their own. Returns the project file to check. */
export async function prepareTypes(folder) {
  await prepare(folder)
  const project = join(folder, 'tsconfig.json')
  writeFileSync(project, JSON.stringify({ files: [], references: PARTS.map(path => ({ path: `./${path}` })) }))
  return project
}

async function prepare(folder) {
  const env = { ...process.env, LANTHORN_BUILD_DIR: folder }
  const { code, text } = await runQuietly({ args: ['node_modules/nuxt/bin/nuxt.mjs', 'prepare'], env })
  if (code !== 0) throw new Failure(`nuxt prepare failed (${code}): ${lastLines(text, 5)}`)
}

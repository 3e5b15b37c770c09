import { existsSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { runQuietly } from './children.mjs'
import { Failure } from './failure.mjs'
import { readIfThere } from './files.mjs'
import { withLock } from './locks.mjs'
import { hashSources } from './sources.mjs'

/** Builds the product into settings.output unless the build there is of these very sources. Returns whether it built. */
export function ensureBuild(settings, say) {
  return withLock(`${settings.output}.lock`, () => buildIfStale(settings, say), 600_000)
}

async function buildIfStale({ output, build }, say) {
  const stamp = join(output, 'sources')
  const hash = hashSources()
  if (readIfThere(stamp) === hash && isWhole(output)) return false
  say('Building (about a minute) ...')
  rmSync(stamp, { force: true })
  const env = { ...process.env, NODE_ENV: 'production', LANTHORN_OUTPUT_DIR: output, LANTHORN_BUILD_DIR: build }
  const { code, text } = await runQuietly({ args: ['node_modules/nuxt/bin/nuxt.mjs', 'build'], env })
  if (code !== 0 || !isWhole(output)) {
    const log = `${output}.log`
    writeFileSync(log, text)
    throw new Failure(`${text.split('\n').slice(-25).join('\n')}\nThe build failed (${code}); its whole output is in ${log}`)
  }
  writeFileSync(stamp, hash)
  return true
}

function isWhole(output) {
  return ['server/index.mjs', 'server/worker.mjs', 'server/analyseThread.mjs'].every(file => existsSync(join(output, file)))
}

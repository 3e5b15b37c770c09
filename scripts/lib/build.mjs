import { existsSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { runQuietly } from './children.mjs'
import { Failure } from './failure.mjs'
import { readIfThere } from './files.mjs'
import { withLock } from './locks.mjs'
import { lastLines } from './processes.mjs'
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
    throw new Failure(`The build failed (${code}): ${firstErrors(text)} (whole output: ${log})`)
  }
  writeFileSync(stamp, hash)
  return true
}

function isWhole(output) {
  return ['server/index.mjs', 'server/worker.mjs', 'server/analyseThread.mjs'].every(file => existsSync(join(output, file)))
}

/** What the build tool said went wrong, without the colours and the stack. */
function firstErrors(text) {
  // eslint-disable-next-line no-control-regex -- colours are escape sequences
  const lines = text.replaceAll(/\u001B\[[\d;]*m/g, '').split('\n')
  const errors = lines.filter(line => /\bERROR\b|\bError\b.*:/.test(line) && !line.includes('✗ Build failed'))
  return lastLines((errors.length > 0 ? errors.slice(0, 3) : lines.slice(-3)).join('\n'), 3)
}

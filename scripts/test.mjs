import { rmSync } from 'node:fs'
import { join } from 'node:path'
import { ensureBuild } from './lib/build.mjs'
import { stopChildren } from './lib/children.mjs'
import { Failure } from './lib/failure.mjs'
import { releaseLock, takeLock } from './lib/locks.mjs'
import { stopMariadb } from './lib/mariadb.mjs'
import { ensureModules } from './lib/modules.mjs'
import { requireProgram } from './lib/packages.mjs'
import { fromRoot } from './lib/paths.mjs'
import { ensurePrepared } from './lib/prepared.mjs'
import { clearAbandonedRuns, makeRunFolder } from './lib/runFolders.mjs'
import { say } from './lib/say.mjs'
import { onStop, runUntilStopped, stopAll, stopOnSignals } from './lib/stopping.mjs'
import { startTestMariadb } from './lib/testMariadb.mjs'
import { cleanEnvironment } from './lib/testRun.mjs'
import { CHECKS, NEED_BUILD, PROJECTS, runCheck, runProject } from './lib/testSteps.mjs'

const output = fromRoot('.output-test')
const types = fromRoot('.nuxt-types')

async function test() {
  const asked = askedSteps(process.argv.slice(2))
  stopOnSignals({ say, exitCode: 130 })
  const folder = await openRunFolder()
  onStop(() => stopChildren())
  await ensureModules(say)
  await ensurePrepared(say)
  if (asked.some(name => name === 'e2e')) await requireProgram({ names: ['chromium'], packageName: 'chromium', say })
  const env = cleanEnvironment({ LANTHORN_TEST_MARIADB: join(folder, 'mariadb'), LANTHORN_OUTPUT_DIR: output, LANTHORN_BUILD_DIR: types })
  const results = [...await runChecksBesideBuild(asked, env)]
  if (asked.some(name => name === 'server' || NEED_BUILD.includes(name))) {
    onStop(() => stopMariadb(env.LANTHORN_TEST_MARIADB))
    await startTestMariadb({ folder: env.LANTHORN_TEST_MARIADB, port: 33_506, say })
  }
  for (const name of PROJECTS.filter(one => asked.includes(one))) {
    if (NEED_BUILD.includes(name) && results.some(result => result.name === 'build' && result.failed > 0)) results.push({ name, passed: 0, failed: 1, skipped: 0, seconds: 0 })
    else results.push(await runProject(name, { folder, env }))
  }
  await stopAll()
  report(results)
}

/** Which steps the command line names; all without any. */
function askedSteps(words) {
  const known = [...CHECKS, ...PROJECTS]
  const unknown = words.find(word => !known.includes(word))
  if (unknown !== undefined) throw new Failure(`There is no part of the tests called "${unknown}". Use any of: ${known.join(', ')}`)
  return words.length > 0 ? words : known
}

/** A folder of this run alone, so that it touches nothing of a running installation. */
async function openRunFolder() {
  const lock = fromRoot('.data/test.lock')
  const holder = takeLock(lock)
  if (holder !== null) throw new Failure(`The tests already run in this checkout (process ${holder}).`)
  onStop(() => releaseLock(lock))
  await clearAbandonedRuns()
  const folder = makeRunFolder()
  onStop(() => rmSync(folder, { recursive: true, force: true }))
  return folder
}

/** Type check and lint use one core while the build uses the other. */
async function runChecksBesideBuild(asked, env) {
  const needsBuild = asked.some(name => NEED_BUILD.includes(name))
  const [built, checks] = await Promise.all([needsBuild ? build() : [], runChecks(CHECKS.filter(name => asked.includes(name)), env)])
  return [...checks, ...built]
}

async function runChecks(names, env) {
  const results = []
  for (const name of names) results.push(await runCheck(name, { env, types }))
  return results
}

/** A build that fails is a result like any other: what does not need it still runs. */
async function build() {
  const begin = Date.now()
  try {
    await ensureBuild({ output, build: fromRoot('.nuxt-test') }, say)
    return []
  }
  catch (error) {
    if (!(error instanceof Failure)) throw error
    say(error.message)
    return [{ name: 'build', passed: 0, failed: 1, skipped: 0, seconds: (Date.now() - begin) / 1000 }]
  }
}

function report(results) {
  const sum = key => results.reduce((total, result) => total + result[key], 0)
  say('')
  for (const { name, passed, failed, skipped, seconds } of results) {
    say(`${name.padEnd(11)} ${passed} passed, ${failed} failed${skipped > 0 ? `, ${skipped} only with LANTHORN_TEST=full` : ''} (${seconds.toFixed(0)} s)`)
  }
  say(`${sum('passed')} passed, ${sum('failed')} failed`)
  process.exitCode = sum('failed') > 0 ? 1 : 0
}

await runUntilStopped(test)

import { rmSync } from 'node:fs'
import { join } from 'node:path'
import { runChild, runQuietly } from './children.mjs'
import { prepareTypes } from './prepared.mjs'
import { countResults } from './testRun.mjs'

export const CHECKS = ['types', 'lint']
export const PROJECTS = ['science', 'components', 'server', 'api', 'e2e']

/** Projects that run against the built product. */
export const NEED_BUILD = ['api', 'e2e']

const CHECK_COMMANDS = {
  types: async ({ types }) => ['node_modules/vue-tsc/bin/vue-tsc.js', '--build', '--noEmit', await prepareTypes(types)],
  lint: () => ['node_modules/eslint/bin/eslint.js', '.'],
}

/** Types or lint: one check, shown only when it fails. */
export async function runCheck(name, { env, types }) {
  const begin = Date.now()
  const { code, text } = await runQuietly({ args: await CHECK_COMMANDS[name]({ types }), env })
  if (code !== 0) process.stdout.write(`${text}\n`)
  return { name, passed: code === 0 ? 1 : 0, failed: code === 0 ? 0 : 1, skipped: 0, seconds: (Date.now() - begin) / 1000 }
}

/** One vitest project, shown as it runs. */
export async function runProject(name, { folder, env }) {
  const begin = Date.now()
  const report = join(folder, `${name}.json`)
  rmSync(report, { force: true })
  const args = ['node_modules/vitest/vitest.mjs', 'run', '--project', name, '--reporter=default', '--reporter=json', `--outputFile.json=${report}`]
  const code = await runChild({ args, env })
  return { name, ...countResults(report, code), seconds: (Date.now() - begin) / 1000 }
}

import { readIfThere } from './files.mjs'

/**
 * What one vitest project came to, from its JSON report.
 * A file that could not be read, a run that ended badly without a failed test, and a project without any test each count as one failure.
 * @returns the three counts
 */
export function countResults(reportPath, exitCode) {
  const text = readIfThere(reportPath)
  if (text === null) return { passed: 0, failed: 1, skipped: 0 }
  const report = JSON.parse(text)
  const results = report.testResults.flatMap(file => file.assertionResults)
  const unreadFiles = report.testResults.filter(file => file.status === 'failed' && file.assertionResults.length === 0).length
  const count = (...states) => results.filter(result => states.includes(result.status)).length
  const failed = count('failed') + unreadFiles
  const isHollow = results.length === 0 && unreadFiles === 0
  return { passed: count('passed'), failed: failed === 0 && (exitCode !== 0 || isHollow) ? 1 : failed, skipped: count('skipped', 'pending', 'todo', 'disabled') }
}

/** The environment of a test run: nothing of a running installation reaches it. */
export function cleanEnvironment(additions, env = process.env) {
  const ours = name => /^(LANTHORN_|NUXT_|NITRO_|DATABASE_)/.test(name) || ['PORT', 'HOST', 'SMTP_URL', 'NODE_ENV'].includes(name)
  const kept = ['LANTHORN_TEST', 'LANTHORN_CHROMIUM']
  return { ...Object.fromEntries(Object.entries(env).filter(([name]) => kept.includes(name) || !ours(name))), ...additions }
}

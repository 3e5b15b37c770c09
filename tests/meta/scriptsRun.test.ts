import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { areModulesCurrent } from '../../scripts/lib/modules.mjs'
import { cleanEnvironment, countResults } from '../../scripts/lib/testRun.mjs'

let folder: string
beforeEach(() => { folder = mkdtempSync(join(tmpdir(), 'lanthorn-run-')) })
afterEach(() => rmSync(folder, { recursive: true, force: true }))

describe('node_modules', () => {
  const lock = { packages: { '': { version: '1' }, 'node_modules/a': { version: '1.0.0' }, 'node_modules/other-system': { version: '2.0.0', optional: true } } }
  const write = (installed: unknown) => {
    writeFileSync(join(folder, 'package-lock.json'), JSON.stringify(lock))
    mkdirSync(join(folder, 'node_modules'), { recursive: true })
    if (installed !== null) writeFileSync(join(folder, 'node_modules/.package-lock.json'), JSON.stringify({ packages: installed }))
    return areModulesCurrent(join(folder, 'node_modules'), join(folder, 'package-lock.json'))
  }

  it('are current when each package of the lock is there, other systems\' aside', () => {
    expect(write({ 'node_modules/a': { version: '1.0.0' } })).toBe(true)
  })

  it('are stale when the lock changed, when one is missing, and after an interrupted installation [issue A.1]', () => {
    expect(write({ 'node_modules/a': { version: '0.9.0' } })).toBe(false)
    expect(write({})).toBe(false)
    rmSync(join(folder, 'node_modules'), { recursive: true })
    expect(write(null)).toBe(false)
  })
})

describe('the count of a test project', () => {
  const count = (testResults: unknown[], exitCode: number) => {
    const path = join(folder, 'report.json')
    writeFileSync(path, JSON.stringify({ testResults }))
    return countResults(path, exitCode)
  }
  const file = (...states: string[]) => ({ status: states.includes('failed') ? 'failed' : 'passed', assertionResults: states.map(status => ({ status })) })

  it('adds up what each test came to', () => {
    expect(count([file('passed', 'passed', 'failed'), file('passed', 'skipped')], 1)).toEqual({ passed: 3, failed: 1, skipped: 1 })
  })

  it('never looks green when a file could not be read, nothing ran, the run ended badly or left no report', () => {
    expect(count([file('passed'), { status: 'failed', assertionResults: [] }], 1).failed).toBe(1)
    expect(count([], 0).failed).toBe(1)
    expect(count([file('passed')], 1).failed).toBe(1)
    expect(countResults(join(folder, 'nothing.json'), 0).failed).toBe(1)
  })
})

describe('the environment of a test run', () => {
  it('holds nothing of a running installation', () => {
    const env = cleanEnvironment({ LANTHORN_OUTPUT_DIR: '/out' }, { PATH: '/bin', DATABASE_URL: 'mysql://live', PORT: '3000', SMTP_URL: 'smtp://live', NUXT_SESSION_PASSWORD: 'x', LANTHORN_DATA: '/live', LANTHORN_TEST: 'full' })
    expect(env).toEqual({ PATH: '/bin', LANTHORN_TEST: 'full', LANTHORN_OUTPUT_DIR: '/out' })
  })
})

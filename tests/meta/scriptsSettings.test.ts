import { mkdtempSync, readFileSync, rmSync, statSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { ensureSecrets } from '../../scripts/lib/secrets.mjs'
import { isLoopback, readSettings } from '../../scripts/lib/settings.mjs'

const DEFAULTS = { port: 3000, data: '.data', output: '.output', build: '.nuxt', databasePort: 33_306 }

describe('settings', () => {
  it('honour PORT and refuse what is no port in one line [issue A.1]', () => {
    expect(readSettings(DEFAULTS, {}).port).toBe(3000)
    expect(readSettings(DEFAULTS, { PORT: '8080' }).port).toBe(8080)
    for (const PORT of ['x', '0', '65536', '80.5', '-1']) expect(() => readSettings(DEFAULTS, { PORT })).toThrow(/^PORT is a whole number from 1 to 65535, not ".*"\.$/)
  })

  it('put storage and mail below the data folder unless told otherwise', () => {
    const settings = readSettings(DEFAULTS, { LANTHORN_DATA: '/srv/lanthorn', LANTHORN_MAIL: '/var/mail/caught' })
    expect(settings.storage).toBe('/srv/lanthorn/files')
    expect(settings.mail).toBe('/var/mail/caught')
  })

  it('let one DATABASE_URL serve for migrations too', () => {
    expect(readSettings(DEFAULTS, { DATABASE_URL: 'mysql://a:b@db/x' }).migrationUrl).toBe('mysql://a:b@db/x')
    expect(readSettings(DEFAULTS, { DATABASE_URL: 'mysql://a:b@db/x', DATABASE_MIGRATION_URL: 'mysql://o:b@db/x' }).migrationUrl).toBe('mysql://o:b@db/x')
  })

  it('refuse a database address of another form, without repeating the password in it', () => {
    for (const DATABASE_URL of ['nonsense', 'postgres://a:secret@db/x', 'mysql://a:secret@db', 'mysql:///x']) {
      expect(() => readSettings(DEFAULTS, { DATABASE_URL })).toThrow(/^DATABASE_URL has the form mysql:\/\/account:password@host:port\/schema\.$/)
    }
  })

  it('know loopback from the rest', () => {
    expect(['127.0.0.1', '127.8.9.1', 'localhost', '::1'].every(isLoopback)).toBe(true)
    expect(['0.0.0.0', '::', '192.168.1.4', '127.0.0.1.example.org', ''].some(isLoopback)).toBe(false)
  })
})

describe('secrets', () => {
  let data: string
  beforeEach(() => { data = mkdtempSync(join(tmpdir(), 'lanthorn-secrets-')) })
  afterEach(() => rmSync(data, { recursive: true, force: true }))

  it('are made once, readable by the owner only [architecture: Secrets]', () => {
    const first = ensureSecrets(data, {})
    expect(statSync(join(data, 'secrets')).mode & 0o777).toBe(0o600)
    expect(first.NUXT_SESSION_PASSWORD!.length).toBeGreaterThanOrEqual(32)
    expect(first.NUXT_CSURF_ENCRYPT_SECRET).toHaveLength(32)
    expect(ensureSecrets(data, {})).toEqual(first)
    expect(new Set(Object.values(first)).size).toBe(Object.keys(first).length)
  })

  it('come from the environment first and are then not written down', () => {
    const NUXT_SESSION_PASSWORD = 'from the environment, long enough by far'
    expect(ensureSecrets(data, { NUXT_SESSION_PASSWORD }).NUXT_SESSION_PASSWORD).toBe(NUXT_SESSION_PASSWORD)
    expect(readFileSync(join(data, 'secrets'), 'utf8')).not.toContain(NUXT_SESSION_PASSWORD)
  })

  it('refuse a secret that the framework would not take', () => {
    expect(() => ensureSecrets(data, { NUXT_SESSION_PASSWORD: 'short' })).toThrow('NUXT_SESSION_PASSWORD needs at least 32 characters.')
    expect(() => ensureSecrets(data, { NUXT_CSURF_ENCRYPT_SECRET: 'x'.repeat(31) })).toThrow('NUXT_CSURF_ENCRYPT_SECRET needs exactly 32 characters.')
  })
})

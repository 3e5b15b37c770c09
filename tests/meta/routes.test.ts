import { readdirSync, readFileSync } from 'node:fs'
import { join, relative } from 'node:path'
import { fileURLToPath } from 'node:url'
import { describe, expect, it } from 'vitest'
import { PERMISSIONS } from '../../shared/permissions'

const root = fileURLToPath(new URL('../../server/api', import.meta.url))
const files = readdirSync(root, { recursive: true, withFileTypes: true }).filter(one => one.isFile()).map(one => relative(root, join(one.parentPath, one.name))).sort()
const READS = ['query', 'file', 'stream']
const WRITES = ['json', 'upload']
/** Routes that nobody need be signed in for. A new one here needs a reason that stands review. */
const PUBLIC = [
  'account/first/[token].get.ts', 'account/first/[token].post.ts', 'account/reset/[token].get.ts', 'account/reset/[token].post.ts', 'account/reset/index.post.ts',
  'health.get.ts', 'invitations/[token].get.ts', 'invitations/[token].post.ts', 'session/demo.get.ts', 'session/index.get.ts', 'session/index.post.ts',
]

const textOf = (file: string) => readFileSync(join(root, file), 'utf8')
const valueOf = (text: string, key: string) => new RegExp(`^ {2}${key}: '([^']+)'`, 'm').exec(text)?.[1]
const permissionOf = (file: string) => valueOf(textOf(file), 'permission')

describe('every file in server/api', () => {
  it('is there to be looked at', () => {
    expect(files.length).toBeGreaterThan(30)
  })

  it('is one call of defineRoute and nothing beside it [house style: a route cannot forget a step]', () => {
    for (const file of files) {
      const text = textOf(file)
      expect([file, (text.match(/^export /gm) ?? []).length, /^export default defineRoute\(\{$/m.test(text)]).toEqual([file, 1, true])
      expect([file, /defineEventHandler|eventHandler\(|readBody|getRouterParam/.test(text)]).toEqual([file, false])
    }
  })

  it('is at most 41 lines long', () => {
    for (const file of files) expect([file, textOf(file).trimEnd().split('\n').length <= 41]).toEqual([file, true])
  })

  it('names a permission that the table has, in words that a test can read', () => {
    for (const file of files) {
      const permission = permissionOf(file)
      expect([file, permission === 'public' || (permission !== undefined && permission in PERMISSIONS)]).toEqual([file, true])
    }
  })

  it('is open to everybody only where the list says so', () => {
    expect(files.filter(file => permissionOf(file) === 'public')).toEqual(PUBLIC)
  })

  it('reads with GET and writes with another method, and says its method in its name', () => {
    for (const file of files.filter(one => one !== '[...path].ts')) {
      const method = /\.(get|post|put|patch|delete)\.ts$/.exec(file)?.[1]
      const variant = valueOf(textOf(file), 'variant')
      expect([file, method === 'get' ? READS.includes(variant ?? '') : method !== undefined && WRITES.includes(variant ?? '')]).toEqual([file, true])
    }
  })

  it('declares what it answers, unless it answers with bytes or a stream', () => {
    for (const file of files.filter(one => one !== '[...path].ts')) {
      const text = textOf(file)
      if (!['file', 'stream'].includes(valueOf(text, 'variant') ?? '')) expect([file, /^ {2}output:? /m.test(text) || /^ {2}output,/m.test(text)]).toEqual([file, true])
    }
  })

  it('takes a permission of programmes under a programme, and one of the installation under admin, never crossed', () => {
    for (const file of files.filter(one => one !== '[...path].ts')) {
      const permission = permissionOf(file)
      if (permission === undefined || permission === 'public' || !(permission in PERMISSIONS)) continue
      const row = PERMISSIONS[permission as keyof typeof PERMISSIONS]
      const place = file.startsWith('programmes/[programme]/') ? 'programme' : file.startsWith('admin/') ? 'installation' : 'self'
      const kinds = { programme: row.administrator === 'none' && row.member === 'none', installation: row.administrator === 'installation', self: row.member === 'self' }
      expect([file, permission, kinds[place]]).toEqual([file, permission, true])
    }
  })

  it('leaves SQL to queries and rules to services', () => {
    for (const file of files) {
      const text = textOf(file)
      expect([file, /queries\/|\.raw\(|knex|memberships|\.roles\.|isAdministrator/.test(text)]).toEqual([file, false])
    }
  })
})

describe('every permission', () => {
  it('guards a route, or a part of a command that one route takes: a row that nothing asks is a row that nothing tests', () => {
    const services = fileURLToPath(new URL('../../server/services', import.meta.url))
    const asked = readdirSync(services, { recursive: true, withFileTypes: true }).filter(one => one.isFile()).map(one => readFileSync(join(one.parentPath, one.name), 'utf8')).join('\n')
    const guards = new Set(files.map(permissionOf))
    expect(Object.keys(PERMISSIONS).filter(permission => !guards.has(permission) && !asked.includes(`'${permission}'`))).toEqual([])
  })
})

import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { spawn } from 'node:child_process'
import { once } from 'node:events'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { releaseLock, takeLock, withLock } from '../../scripts/lib/locks.mjs'

let folder: string
beforeEach(() => { folder = mkdtempSync(join(tmpdir(), 'lanthorn-locks-')) })
afterEach(() => rmSync(folder, { recursive: true, force: true }))

describe('a lock file', () => {
  it('is refused while its holder lives, and names it', () => {
    const lock = join(folder, 'a.lock')
    expect(takeLock(lock)).toBeNull()
    expect(takeLock(lock)).toBe(process.pid)
    releaseLock(lock)
    expect(takeLock(lock)).toBeNull()
  })

  it('is taken over when its holder was killed [issue A.1: after kill -9]', async () => {
    const lock = join(folder, 'b.lock')
    const module = new URL('../../scripts/lib/locks.mjs', import.meta.url).href
    const child = spawn(process.execPath, ['--input-type=module', '-e', `const { takeLock } = await import('${module}'); takeLock('${lock}'); console.info('held'); setInterval(() => {}, 1000)`])
    await once(child.stdout, 'data')
    expect(takeLock(lock)).toBe(child.pid)
    child.kill('SIGKILL')
    await once(child, 'exit')
    expect(takeLock(lock)).toBeNull()
  })

  it('is taken over when its number now belongs to another program', () => {
    const lock = join(folder, 'c.lock')
    writeFileSync(lock, JSON.stringify({ pid: process.pid, command: ['/usr/bin/something-else'] }))
    expect(takeLock(lock)).toBeNull()
  })

  it('is taken over when a crash cut its text short', () => {
    const lock = join(folder, 'd.lock')
    writeFileSync(lock, '{"pid":')
    expect(takeLock(lock)).toBeNull()
    expect(JSON.parse(readFileSync(lock, 'utf8')).pid).toBe(process.pid)
  })

  it('runs the work of two one after the other, and is gone after a failure', async () => {
    const lock = join(folder, 'e.lock')
    const order: string[] = []
    const work = (name: string) => withLock(lock, async () => {
      order.push(`${name} begins`)
      await new Promise(resolve => setTimeout(resolve, 20))
      order.push(`${name} ends`)
    })
    await Promise.all([work('first'), work('second')])
    expect(order).toEqual(['first begins', 'first ends', 'second begins', 'second ends'])
    await expect(withLock(lock, () => Promise.reject(new Error('no')))).rejects.toThrow('no')
    expect(existsSync(lock)).toBe(false)
  })
})

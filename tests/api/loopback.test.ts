import { spawn, type ChildProcess } from 'node:child_process'
import { once } from 'node:events'
import { join } from 'node:path'
import { setTimeout as delay } from 'node:timers/promises'
import { afterAll, afterEach, beforeAll, describe, expect, inject, it } from 'vitest'
import { fromRoot } from '../../scripts/lib/paths.mjs'
import { makeOwnDeps, type OwnDeps } from '../support/ownSchema'
import { anyFreePort } from '../support/ports'

// Loopback by another name: not on the list of names the product knows as loopback, and still no other machine can reach it.
const NOT_KNOWN_AS_LOOPBACK = '::ffff:127.0.0.1'
const script = join(process.env.LANTHORN_OUTPUT_DIR ?? fromRoot('.output-try'), 'server/index.mjs')
let empty: OwnDeps
let running: ChildProcess | null = null
beforeAll(async () => { empty = await makeOwnDeps() })
afterEach(async () => {
  if (running && running.exitCode === null) {
    running.kill('SIGKILL')
    await once(running, 'exit')
  }
})
afterAll(() => empty.close())

interface Started { said: () => string, ended: Promise<number | null>, port: number }

async function startWeb(databaseUrl: string, host: string): Promise<Started> {
  const port = await anyFreePort()
  const web = spawn(process.execPath, [script], {
    stdio: ['ignore', 'pipe', 'pipe'],
    env: {
      ...process.env, NODE_ENV: 'production', HOST: host, NITRO_HOST: host, PORT: String(port), NITRO_PORT: String(port), DATABASE_URL: databaseUrl, DATABASE_MIGRATION_URL: '',
      LANTHORN_STORAGE: inject('storageFolder'), NUXT_SESSION_PASSWORD: 'x'.repeat(48), NUXT_CSURF_ENCRYPT_SECRET: 'y'.repeat(32),
    },
  })
  running = web
  let text = ''
  web.stderr.on('data', (piece: Buffer) => { text += piece.toString() })
  return { said: () => text, ended: new Promise(resolve => web.once('exit', resolve)), port }
}

async function answers(port: number): Promise<number> {
  for (let n = 0; n < 200; n++) {
    try {
      return (await fetch(`http://127.0.0.1:${port}/api/health`)).status
    }
    catch (error) {
      if ((error as { cause?: { code?: string } }).cause?.code !== 'ECONNREFUSED') throw error
      await delay(100)
    }
  }
  throw new Error('The web process does not listen.')
}

describe('a web process that others could reach', () => {
  it('ends with one line that says why, while demo accounts exist [architecture: people]', async () => {
    const { ended, said } = await startWeb(inject('databaseUrl'), NOT_KNOWN_AS_LOOPBACK)
    expect(await ended).toBe(1)
    expect(said().trim().split('\n').filter(line => line.includes('demo accounts'))).toHaveLength(1)
    expect(said()).toContain(NOT_KNOWN_AS_LOOPBACK)
  })

  it('serves where there are none', async () => {
    const { port } = await startWeb(empty.databaseUrl, NOT_KNOWN_AS_LOOPBACK)
    expect(await answers(port)).toBe(200)
  })

  it('serves on loopback although there are some', async () => {
    const { port } = await startWeb(inject('databaseUrl'), '127.0.0.1')
    expect(await answers(port)).toBe(200)
  })

  it('ends rather than guess when the database cannot be asked', async () => {
    const url = new URL(inject('databaseUrl'))
    url.port = String(await anyFreePort())
    const { ended, said } = await startWeb(url.href, NOT_KNOWN_AS_LOOPBACK)
    expect(await ended).toBe(1)
    expect(said()).toContain('before it knows that there are no demo accounts')
  })
})

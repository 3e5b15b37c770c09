import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Knex } from 'knex'
import { setTimeout as delay } from 'node:timers/promises'
import { startMariadb, stopMariadb } from '../../scripts/lib/mariadb.mjs'
import { makeRunFolder } from '../../scripts/lib/runFolders.mjs'
import { rmSync } from 'node:fs'
import { systemClock } from '../../server/platform/clock'
import { openDatabase } from '../../server/platform/database'
import { sha256 } from '../../server/platform/hashes'
import { toBinary } from '../../server/platform/ids'
import { folderStorage } from '../../server/platform/storage'
import { INSTALLATION_CHAIN } from '../../server/services/unitOfWork'
import { verifyAudit } from '../../server/services/verifyAudit'
import { createRandom } from '../../shared/science/random'
import { type KillRun, makeRun, oneRound, type Phase, type Round } from '../support/killRun'
import { makeDeps } from '../support/factory'
import { type Stack, startStack } from '../support/stack'

const SEED = 20_261_201
const PARTS = ['web', 'worker', 'database'] as const
const PHASES: readonly Phase[] = ['upload', 'fit', 'sign']
const TIMES = 30

describe.runIf(process.env.LANTHORN_TEST === 'full')('the product under kill -9 [architecture: one transaction per command, leases and fences]', () => {
  const folder = makeRunFolder()
  const mariadb = { folder, port: 33_606, bufferPool: '128M', say: (line: string) => process.stderr.write(`${line}\n`) }
  const random = createRandom(SEED)
  let stack: Stack
  let run: KillRun
  let db: Knex

  beforeAll(async () => {
    stack = await startStack({ withDemo: false, server: await startMariadb(mariadb), longestPause_ms: 500 })
    db = openDatabase(stack.databaseUrl, { maxConnections: 4 })
    run = await makeRun(makeDeps({ db, clock: systemClock, storage: folderStorage(stack.storageFolder) }), stack.baseURL)
  })
  afterAll(async () => {
    await db?.destroy()
    await stack?.stop()
    await stopMariadb(folder)
    rmSync(folder, { recursive: true, force: true })
  })

  async function kill(part: (typeof PARTS)[number]): Promise<void> {
    if (part !== 'database') {
      stack.kill(part)
      return
    }
    process.kill((await startMariadb(mariadb)).pid, 'SIGKILL')
    await startMariadb({ ...mariadb, isPortFixed: true })
  }

  const count = async (table: string, where: Record<string, unknown> = {}): Promise<number> => {
    const row = await db(table).where(where).count({ n: '*' }).first() as { n: number }
    return Number(row.n)
  }

  it(`loses nothing and does nothing twice when web, worker and database are killed ${TIMES} times during upload, fit and sign`, async () => {
    const quiet = await oneRound(run, 0)
    const rounds: Round[] = [quiet]
    let disturbed = 0
    for (let i = 1; i <= TIMES; i++) {
      const part = PARTS[i % 3]!
      const phase = PHASES[Math.floor(i / 3) % 3]!
      let killing: Promise<void> = Promise.resolve()
      const round = await oneRound(run, i, (now) => {
        if (now !== phase) return
        const after_ms = random.uniform() * quiet.took_ms[phase]
        killing = delay(after_ms).then(() => kill(part))
      })
      await killing
      // A killed process comes back after half a second; the next round starts with all of them.
      await delay(1_000)
      disturbed += round.tries > round.commands ? 1 : 0
      rounds.push(round)
    }
    // Kills that fall between two commands prove little: some must have cut a command off.
    expect(disturbed).toBeGreaterThan(TIMES / 10)

    const programme = toBinary(run.programme.id)
    const uploads = rounds.map(one => one.upload)
    const seriesIds = rounds.flatMap(one => one.seriesIds)
    const fits = rounds.flatMap(one => one.fitIds)
    expect(new Set(seriesIds).size).toBe(2 * rounds.length)
    expect(new Set(fits).size).toBe(seriesIds.length)
    // Nothing twice: as many rows as commands that were answered. Nothing lost: each of them is there.
    expect(await count('upload')).toBe(uploads.length)
    expect(await count('series')).toBe(seriesIds.length)
    expect(await count('fit', { programme_id: programme, version_no: 1, outcome: 'ok' })).toBe(fits.length)
    expect(await count('fit')).toBe(fits.length)
    expect(await count('evidence', { quantity: 'r1_per_mM_s' })).toBe(fits.length)
    expect(await count('check_event', { event: 'waiting', seq: 1 })).toBe(fits.length)
    expect(await count('check_event', { event: 'signed', seq: 2 })).toBe(fits.length)
    expect(await count('check_event')).toBe(2 * fits.length)
    expect(await count('check_current', { state: 'signed', seq: 2 })).toBe(fits.length)
    for (const id of seriesIds) expect(await count('series', { id: toBinary(id) }), id).toBe(1)
    for (const id of fits) expect(await count('check_event', { subject_id: toBinary(id) }), id).toBe(2)
    const storage = folderStorage(stack.storageFolder)
    for (const { id, text } of uploads) {
      const row = await db('upload').where({ id: toBinary(id) }).first('storage_key', 'sha256') as { storage_key: string, sha256: Buffer }
      const bytes = await storage.get(row.storage_key)
      expect(bytes && sha256(bytes).equals(row.sha256) && sha256(new TextEncoder().encode(text)).equals(row.sha256), id).toBe(true)
    }
  }, 40 * 60_000)

  it('leaves whole audit chains with one link for each command that was answered', async () => {
    expect(await verifyAudit({ db }, run.programme.id)).toMatchObject({ whole: true })
    expect(await verifyAudit({ db }, INSTALLATION_CHAIN)).toMatchObject({ whole: true })
    const links = { confirmUpload: TIMES + 1, storeFit: 2 * (TIMES + 1), submitForCheck: 2 * (TIMES + 1), signEvidence: 2 * (TIMES + 1) }
    for (const [command, expected] of Object.entries(links)) expect([command, await count('audit', { command })]).toEqual([command, expected])
  })

  it('finishes every job once the processes are back, and parks none', async () => {
    const end = Date.now() + 120_000
    const open = () => db('job').whereIn('state', ['ready', 'running']).whereNot({ kind: 'uploads.sweep' }).select('kind', 'state') as Promise<unknown[]>
    while ((await open()).length > 0 && Date.now() < end) await delay(500)
    expect(await open()).toEqual([])
    expect(await count('job', { state: 'parked' })).toBe(0)
    expect(await count('job', { kind: 'fit.run', state: 'done' })).toBe(2 * (TIMES + 1))
  }, 150_000)
})

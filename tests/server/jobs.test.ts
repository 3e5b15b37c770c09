import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from 'vitest'
import { z } from 'zod'
import { defineJob, type JobKind, type JobRun } from '../../server/jobs/define'
import { drainJobs, LEASE_SECONDS, runNextJob } from '../../server/jobs/runJobs'
import { toBinary } from '../../server/platform/ids'
import { claimJob, countJobs, failJob, findJob, finishJob, insertJob, keepJob, resumeJob, type JobRow } from '../../server/queries/jobs'
import { makeOwnDeps, type OwnDeps } from '../support/ownSchema'

let deps: OwnDeps
beforeAll(async () => { deps = await makeOwnDeps() })
afterAll(() => deps.close())
afterEach(async () => {
  vi.restoreAllMocks()
  // The next test counts the whole queue.
  await deps.db('job').delete()
})

const add = (more: Partial<Parameters<typeof insertJob>[1]> = {}) => {
  const id = deps.ids.next()
  return insertJob(deps.db, { id, programmeId: null, kind: 'test', dedupeKey: id, payload: {}, maxAttempts: 3, at: deps.clock.now(), ...more })
}
const change = (id: string, columns: Record<string, unknown>) => deps.db('job').where({ id: toBinary(id) }).update(columns)
const loseLease = (id: string) => change(id, { lease_until: deps.db.raw('DATE_SUB(NOW(6), INTERVAL 1 SECOND)') })
const secondsUntilRun = async (id: string) => Number((await deps.db('job').where({ id: toBinary(id) }).first(deps.db.raw('TIMESTAMPDIFF(MICROSECOND, NOW(6), run_after) / 1e6 AS s')) as { s: string }).s)
const kind = (run: (one: JobRun<Record<string, never>>) => Promise<void>, limitSeconds = 5): Record<string, JobKind> => ({
  test: defineJob({ kind: 'test', payload: z.object({}), limitSeconds, run: (_, one) => run(one as JobRun<Record<string, never>>) }) as JobKind,
})
const silence = () => vi.spyOn(console, 'error').mockImplementation(() => undefined)

describe('claiming', () => {
  it('gives two jobs to two of three who claim at once, and nothing to the third [house style: measured]', async () => {
    for (let round = 0; round < 5; round++) {
      const ids = [await add(), await add()]
      const claimed = await Promise.all([1, 2, 3].map(() => claimJob(deps.db, LEASE_SECONDS)))
      expect(claimed.filter(one => one === null)).toHaveLength(1)
      expect(claimed.flatMap(one => one?.id ?? []).sort()).toEqual([...ids].sort())
      await deps.db('job').delete()
    }
  })

  it('takes the job that is due longest, and none that is not due', async () => {
    const [later, due, first] = [await add(), await add(), await add()]
    await change(later, { run_after: deps.db.raw('DATE_ADD(NOW(6), INTERVAL 60 SECOND)') })
    await change(first, { run_after: deps.db.raw('DATE_SUB(NOW(6), INTERVAL 60 SECOND)') })
    expect((await claimJob(deps.db, LEASE_SECONDS))?.id).toBe(first)
    expect((await claimJob(deps.db, LEASE_SECONDS))?.id).toBe(due)
    expect(await claimJob(deps.db, LEASE_SECONDS)).toBeNull()
  })

  it('does not hold up somebody who enqueues meanwhile', async () => {
    await add()
    await deps.db.transaction(async (trx) => {
      expect(await trx('job').where({ state: 'ready' }).forUpdate().skipLocked().first('id')).toBeDefined()
      await expect(add()).resolves.toBeDefined()
    }, { isolationLevel: 'read committed' })
  })

  it('answers a second job under one dedupe key with the first', async () => {
    const id = await add({ dedupeKey: 'same' })
    expect(await add({ dedupeKey: 'same' })).toBe(id)
    expect(await countJobs(deps.db)).toMatchObject({ ready: 1 })
  })

  it('takes jobs of one programme only, where that is asked', async () => {
    await add()
    expect(await claimJob(deps.db, LEASE_SECONDS, deps.ids.next())).toBeNull()
  })
})

describe('a lease', () => {
  it('that is held keeps others away; one that ran out lets them in, with a higher fence', async () => {
    const id = await add()
    const first = (await claimJob(deps.db, LEASE_SECONDS))!
    expect(await claimJob(deps.db, LEASE_SECONDS)).toBeNull()
    await loseLease(id)
    const second = (await claimJob(deps.db, LEASE_SECONDS))!
    expect(second).toMatchObject({ id, fence: first.fence + 1, attempts: 2 })
  })

  it('lost means that the first holder can neither prolong nor finish nor fail it [fencing]', async () => {
    const id = await add()
    const first = (await claimJob(deps.db, LEASE_SECONDS))!
    await loseLease(id)
    const second = (await claimJob(deps.db, LEASE_SECONDS))!
    expect(await keepJob(deps.db, first, LEASE_SECONDS, 0.5)).toBe(false)
    expect(await finishJob(deps.db, first, deps.clock.now())).toBe(false)
    await failJob(deps.db, first, 'too late', 1)
    expect(await findJob(deps.db, id)).toMatchObject({ state: 'running', fence: second.fence, error: null })
    expect(await finishJob(deps.db, second, deps.clock.now())).toBe(true)
    expect(await findJob(deps.db, id)).toMatchObject({ state: 'done', progress: 1 })
  })

  it('prolonged keeps the job and its progress', async () => {
    const id = await add()
    const job = (await claimJob(deps.db, 1))!
    expect(await keepJob(deps.db, job, LEASE_SECONDS, 0.25)).toBe(true)
    await new Promise(resolve => setTimeout(resolve, 1100))
    expect(await claimJob(deps.db, LEASE_SECONDS)).toBeNull()
    expect(await findJob(deps.db, id)).toMatchObject({ progress: 0.25 })
  })
})

describe('a failed job', () => {
  it('comes again after pauses of 2, 4, 8 s, and is parked when its attempts are used up', async () => {
    silence()
    const id = await add()
    const failing = kind(async () => { throw new Error('no such luck') })
    for (const pause of [2, 4]) {
      expect(await runNextJob(deps, failing)).toBe(true)
      expect(await findJob(deps.db, id)).toMatchObject({ state: 'ready', error: 'no such luck' })
      expect(Math.abs(await secondsUntilRun(id) - pause)).toBeLessThan(1)
      await change(id, { run_after: deps.db.raw('NOW(6)') })
    }
    await runNextJob(deps, failing)
    expect(await findJob(deps.db, id)).toMatchObject({ state: 'parked', attempts: 3, error: 'no such luck' })
    await change(id, { run_after: deps.db.raw('NOW(6)') })
    expect(await runNextJob(deps, failing)).toBe(false)
  })

  it('that killed its worker each time is parked and not run for ever', async () => {
    const id = await add({ maxAttempts: 2 })
    for (let n = 0; n < 2; n++) {
      expect(await claimJob(deps.db, LEASE_SECONDS)).not.toBeNull()
      await loseLease(id)
    }
    expect(await claimJob(deps.db, LEASE_SECONDS)).toBeNull()
    expect(await findJob(deps.db, id)).toMatchObject({ state: 'parked', error: expect.stringContaining('worker stopped') as string })
  })

  it('resumed by hand has its attempts back', async () => {
    const id = await add({ maxAttempts: 1 })
    await failJob(deps.db, (await claimJob(deps.db, LEASE_SECONDS))!, 'x', 1)
    expect(await resumeJob(deps.db, id)).toBe(true)
    expect(await resumeJob(deps.db, id)).toBe(false)
    expect(await claimJob(deps.db, LEASE_SECONDS)).toMatchObject({ id, attempts: 1 })
  })
})

describe('running', () => {
  it('marks a job done that stored nothing, and leaves the mark of one that finished itself', async () => {
    const ids = [await add(), await add()]
    const at = new Date('2026-01-01T00:00:00Z')
    await drainJobs(deps, kind(async ({ job }) => { if (job.id === ids[1]) await finishJob(deps.db, job, at) }))
    expect(await findJob(deps.db, ids[0]!)).toMatchObject({ state: 'done', finishedAt: deps.clock.now() })
    expect(await findJob(deps.db, ids[1]!)).toMatchObject({ state: 'done', finishedAt: at })
  })

  it('tells a run that its kind\'s time is over', async () => {
    silence()
    const id = await add({ maxAttempts: 1 })
    await runNextJob(deps, kind(({ signal }) => new Promise((_, reject) => { signal.addEventListener('abort', () => reject(signal.reason as Error)) }), 0.05))
    expect(await findJob(deps.db, id)).toMatchObject({ state: 'parked', error: expect.stringContaining('longer than') as string })
  })

  it('fails a job whose kind nobody knows, and one whose payload does not fit', async () => {
    silence()
    const [stranger, misfit] = [await add({ kind: 'unknown', maxAttempts: 1 }), await add({ maxAttempts: 1, payload: [] })]
    await drainJobs(deps, kind(async () => undefined))
    expect((await findJob(deps.db, stranger))?.error).toContain('unknown')
    expect(await findJob(deps.db, misfit)).toMatchObject({ state: 'parked' })
  })

  it('stores a result once when two workers run the same job, the first having lost its lease', async () => {
    const id = await add()
    const stored: string[] = []
    const store = async (name: string, job: JobRow) => {
      await deps.db.transaction(async (trx) => {
        if (!await finishJob(trx, job, deps.clock.now())) throw new Error('The lease of this job was lost.')
        stored.push(name)
      })
    }
    const first = (await claimJob(deps.db, LEASE_SECONDS))!
    await loseLease(id)
    const second = (await claimJob(deps.db, LEASE_SECONDS))!
    const outcomes = await Promise.allSettled([store('first', first), store('second', second)])
    expect(outcomes.map(one => one.status)).toEqual(['rejected', 'fulfilled'])
    expect(stored).toEqual(['second'])
  })
})

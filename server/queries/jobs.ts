import type { Knex } from 'knex'
import { fromBinary, fromBinaryOrNull, toBinary, toBinaryOrNull } from '../platform/ids'
import { isDuplicate } from '../platform/database'

export type JobState = 'ready' | 'running' | 'done' | 'parked' | 'cancelled'

export interface JobRow {
  id: string
  programmeId: string | null
  kind: string
  payload: unknown
  state: JobState
  attempts: number
  maxAttempts: number
  fence: number
  progress: number | null
  error: string | null
  createdAt: Date
  finishedAt: Date | null
}

export interface NewJob {
  id: string
  programmeId: string | null
  kind: string
  /** The same key again is the same job: nothing is added. */
  dedupeKey: string
  payload: unknown
  maxAttempts: number
  at: Date
  /** Not before this many seconds have passed; at once when left out. */
  delaySeconds?: number
}

interface Raw { id: Buffer, programme_id: Buffer | null, kind: string, payload: string, state: JobState, attempts: number, max_attempts: number, fence: number, progress: number | null, error: string | null, created_at: Date, finished_at: Date | null }

const toJob = (row: Raw): JobRow => ({
  id: fromBinary(row.id), programmeId: fromBinaryOrNull(row.programme_id), kind: row.kind, payload: JSON.parse(row.payload), state: row.state, attempts: row.attempts,
  maxAttempts: row.max_attempts, fence: row.fence, progress: row.progress, error: row.error, createdAt: row.created_at, finishedAt: row.finished_at,
})

/** @returns the id of the job that stands under the key, new or there before */
export async function insertJob(trx: Knex, job: NewJob): Promise<string> {
  try {
    await trx('job').insert({
      id: toBinary(job.id), programme_id: toBinaryOrNull(job.programmeId), kind: job.kind, dedupe_key: job.dedupeKey, payload: JSON.stringify(job.payload),
      max_attempts: job.maxAttempts, run_after: trx.raw('DATE_ADD(NOW(6), INTERVAL ? SECOND)', [job.delaySeconds ?? 0]), created_at: job.at,
    })
    return job.id
  }
  catch (error) {
    if (!isDuplicate(error, 'dedupe')) throw error
    const row = await trx('job').where({ dedupe_key: job.dedupeKey }).first('id') as { id: Buffer }
    return fromBinary(row.id)
  }
}

/**
 * Takes the oldest ready job, or one whose lease ran out, and commits at once. The fence counts claims: whoever finishes must show the newest.
 * READ COMMITTED, because the gap locks of REPEATABLE READ would hold up everyone who enqueues. Times are the database's own.
 * @param programmeId only jobs of this programme: for tests and loading that must not take somebody else's
 * @returns null when there is nothing to do
 */
export async function claimJob(db: Knex, leaseSeconds: number, programmeId?: string): Promise<JobRow | null> {
  return db.transaction(async (trx) => {
    const within = () => trx('job').modify((query) => { if (programmeId) void query.where('programme_id', toBinary(programmeId)) })
    const row = await within()
      .where(ready => ready.where('state', 'ready').where('run_after', '<=', trx.raw('NOW(6)')))
      .orderBy('run_after').orderBy('id').forUpdate().skipLocked().first('*') as Raw | undefined
      ?? await within().where('state', 'running').where('lease_until', '<', trx.raw('NOW(6)')).orderBy('lease_until').forUpdate().skipLocked().first('*') as Raw | undefined
    if (!row) return null
    if (row.attempts >= row.max_attempts) {
      await trx('job').where({ id: row.id }).update({ state: 'parked', lease_until: null, error: row.error ?? 'The worker stopped while this ran, every time it was tried.' })
      return null
    }
    await trx('job').where({ id: row.id }).update({
      state: 'running', attempts: row.attempts + 1, fence: row.fence + 1, lease_until: trx.raw('DATE_ADD(NOW(6), INTERVAL ? SECOND)', [leaseSeconds]),
    })
    return toJob({ ...row, state: 'running', attempts: row.attempts + 1, fence: row.fence + 1 })
  }, { isolationLevel: 'read committed' })
}

/** Prolongs the lease of a running job and stores its progress, 0 to 1. @returns false when somebody else holds it by now */
export async function keepJob(db: Knex, job: JobRow, leaseSeconds: number, progress: number | null): Promise<boolean> {
  const changed = await mine(db, job).update({ lease_until: db.raw('DATE_ADD(NOW(6), INTERVAL ? SECOND)', [leaseSeconds]), ...(progress === null ? {} : { progress }) })
  return changed === 1
}

/** Marks the job done, inside the transaction that stores what it made. @returns false with a stale fence: then that transaction must be undone */
export async function finishJob(trx: Knex, job: Pick<JobRow, 'id' | 'fence'>, at: Date): Promise<boolean> {
  return await mine(trx, job).update({ state: 'done', progress: 1, lease_until: null, error: null, finished_at: at }) === 1
}

/** After a failure: ready again after a pause that doubles, or parked when the attempts are used up. */
export async function failJob(db: Knex, job: JobRow, message: string, pauseSeconds: number): Promise<void> {
  const parked = job.attempts >= job.maxAttempts
  await mine(db, job).update({ state: parked ? 'parked' : 'ready', lease_until: null, error: message.slice(0, 2000), run_after: db.raw('DATE_ADD(NOW(6), INTERVAL ? SECOND)', [pauseSeconds]) })
}

const mine = (db: Knex, job: Pick<JobRow, 'id' | 'fence'>) => db('job').where({ id: toBinary(job.id), state: 'running', fence: job.fence })

/** Puts a parked job back in the queue with its attempts given back. @returns false when it was not parked */
export async function resumeJob(trx: Knex, id: string): Promise<boolean> {
  return await trx('job').where({ id: toBinary(id), state: 'parked' }).update({ state: 'ready', attempts: 0, error: null, run_after: trx.raw('NOW(6)') }) === 1
}

/** Jobs of a programme that are not finished, and those finished after `since`; for progress, never with payloads of others. */
export async function programmeJobs(db: Knex, programmeId: string, since: Date): Promise<JobRow[]> {
  const rows = await db('job').where({ programme_id: toBinary(programmeId) })
    .where(one => one.whereIn('state', ['ready', 'running', 'parked']).orWhere('finished_at', '>', since)).orderBy('created_at', 'desc').limit(200) as Raw[]
  return rows.map(toJob)
}

export async function countJobs(db: Knex): Promise<Record<JobState, number>> {
  const rows = await db('job').groupBy('state').select('state').count({ n: '*' }) as unknown as { state: JobState, n: number }[]
  const counts: Record<JobState, number> = { ready: 0, running: 0, done: 0, parked: 0, cancelled: 0 }
  for (const row of rows) counts[row.state] = Number(row.n)
  return counts
}

export async function findJob(db: Knex, id: string): Promise<JobRow | null> {
  const row = await db('job').where({ id: toBinary(id) }).first('*') as Raw | undefined
  return row ? toJob(row) : null
}

export async function parkedJobs(db: Knex): Promise<JobRow[]> {
  const rows = await db('job').where({ state: 'parked' }).orderBy('created_at', 'desc').limit(100) as Raw[]
  return rows.map(toJob)
}

import { claimJob, failJob, finishJob, keepJob, type JobRow } from '../queries/jobs'
import type { JobKind, WorkerDeps } from './define'

export const LEASE_SECONDS = 20
const HEARTBEAT_MS = 5_000
const LONGEST_PAUSE_SECONDS = 600

/**
 * Claims one job and runs it to its end. The lease is prolonged while it runs; when it is lost, or the kind's time is over, the run is told to stop
 * and whatever it tries to store fails on the fence.
 * @returns false when there was nothing to do
 */
export async function runNextJob(deps: WorkerDeps, kinds: Readonly<Record<string, JobKind>>, programmeId?: string): Promise<boolean> {
  const job = await claimJob(deps.db, LEASE_SECONDS, programmeId)
  if (!job) return false
  const stop = new AbortController()
  let progress: number | null = null
  const heartbeat = setInterval(() => {
    keepJob(deps.db, job, LEASE_SECONDS, progress).then((kept) => { if (!kept) stop.abort(new Error('The lease of this job was lost.')) }, error => stop.abort(error))
  }, HEARTBEAT_MS)
  try {
    await runOne(deps, kinds, { job, stop, report: (fraction) => { progress = fraction } })
  }
  catch (error) {
    const message = error instanceof Error ? error.stack ?? error.message : String(error)
    console.error(JSON.stringify({ at: deps.clock.now().toISOString(), job: job.id, kind: job.kind, attempt: job.attempts, error: message }))
    await failJob(deps.db, job, error instanceof Error ? error.message : String(error), Math.min(2 ** job.attempts, LONGEST_PAUSE_SECONDS))
  }
  finally {
    clearInterval(heartbeat)
  }
  return true
}

interface OneRun { job: JobRow, stop: AbortController, report: (fraction: number) => void }

async function runOne(deps: WorkerDeps, kinds: Readonly<Record<string, JobKind>>, { job, stop, report }: OneRun): Promise<void> {
  const kind = kinds[job.kind]
  if (!kind) throw new Error(`No job kind is called ${job.kind}.`)
  const limit = setTimeout(() => stop.abort(new Error(`This job took longer than ${kind.limitSeconds} s.`)), kind.limitSeconds * 1000)
  try {
    await kind.run(deps, { job, payload: kind.payload.parse(job.payload), report, signal: stop.signal })
    stop.signal.throwIfAborted()
    // A run that stored something has finished the job in that transaction already; then this changes nothing.
    await finishJob(deps.db, job, deps.clock.now())
  }
  finally {
    clearTimeout(limit)
  }
}

/** Runs until there is nothing ready any more, in one programme where one is named: for tests and for loading demo data. */
export async function drainJobs(deps: WorkerDeps, kinds: Readonly<Record<string, JobKind>>, programmeId?: string): Promise<number> {
  let done = 0
  while (await runNextJob(deps, kinds, programmeId)) done++
  return done
}

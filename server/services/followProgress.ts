import { AppError } from '../../shared/errors'
import { scopeOf } from '../../shared/permissions'
import type { ProgressDto, ProgressJob } from '../../shared/schemas/progress'
import type { Deps } from '../platform/deps'
import { type JobRow, programmeJobs } from '../queries/jobs'
import { findActor } from '../queries/people'

/** How long a finished job is still told of, so that a browser that was away for a moment hears of it. */
const TELLS_FINISHED_MS = 60_000

export interface FollowInput { sessionId: string, programmeId: string }

/**
 * Jobs of a programme that a person can wait for, read from the jobs table. Asked again and again by one open answer, so it looks up the person each time:
 * whoever is removed hears nothing more.
 */
export async function followProgress(deps: Pick<Deps, 'db' | 'clock'>, { sessionId, programmeId }: FollowInput): Promise<ProgressDto> {
  const actor = await findActor(deps.db, sessionId)
  if (!actor || scopeOf(actor, 'progress.follow', programmeId) === 'none') throw new AppError('notSignedIn', 'Sign in to go on.')
  return readProgress(deps, programmeId)
}

export async function readProgress({ db, clock }: Pick<Deps, 'db' | 'clock'>, programmeId: string): Promise<ProgressDto> {
  const now = clock.now()
  const jobs = await programmeJobs(db, programmeId, new Date(now.getTime() - TELLS_FINISHED_MS))
  return { at: now.toISOString(), jobs: jobs.filter(job => seriesOf(job) !== null).map(progressJob) }
}

const WORDS = { ready: 'queued', running: 'running', done: 'done', parked: 'parked', cancelled: 'cancelled' } as const

function progressJob(job: JobRow): ProgressJob {
  return {
    jobId: job.id, kind: job.kind, seriesId: seriesOf(job), state: WORDS[job.state], fraction: job.progress, attempts: job.attempts, maxAttempts: job.maxAttempts,
    error: job.error?.split('\n')[0]?.slice(0, 300) ?? null, finishedAt: job.finishedAt?.toISOString() ?? null,
  }
}

/** The series that a job works for; jobs without one (mail, sweeping) are nobody's to wait for. */
function seriesOf(job: JobRow): string | null {
  const { payload } = job
  return typeof payload === 'object' && payload !== null && 'seriesId' in payload && typeof payload.seriesId === 'string' ? payload.seriesId : null
}

import type { Actor } from '../../shared/permissions'
import { AppError } from '../../shared/errors'
import type { SystemState } from '../../shared/schemas/installation'
import type { Deps } from '../platform/deps'
import { countJobs, parkedJobs, resumeJob } from '../queries/jobs'
import { newestMail } from '../queries/mail'
import { listProcesses } from '../queries/processes'
import { countDueJobs, databaseState, uploadSize } from '../queries/system'
import { unitOfWork } from './unitOfWork'

/** What an administrator looks at first when something seems stuck. */
export async function systemState({ db }: Pick<Deps, 'db'>): Promise<SystemState> {
  const [mail] = await newestMail(db, { limit: 1, offset: 0 })
  const parked = await parkedJobs(db)
  const processes = await listProcesses(db)
  return {
    jobs: { ...await countJobs(db), due: await countDueJobs(db) },
    parked: parked.map(job => ({ id: job.id, kind: job.kind, attempts: job.attempts, error: job.error, createdAt: job.createdAt.toISOString() })),
    processes: processes.map(one => ({ name: one.name, role: one.role, startedAt: one.startedAt.toISOString(), silent_s: one.silent_s, engine: one.engine })),
    files: await uploadSize(db),
    database: await databaseState(db),
    lastMail: mail ? { to: mail.to, subject: mail.subject, at: mail.createdAt.toISOString(), sent: mail.sent } : null,
  }
}

/** Puts a job that gave up back into the queue. @throws AppError('conflict') when it is not parked (any more) */
export async function resumeParkedJob(deps: Deps, { actor, jobId }: { actor: Actor, jobId: string }): Promise<{ done: true }> {
  return unitOfWork(deps, { actor, name: 'resumeParkedJob', programmeId: null }, async ({ trx }) => {
    if (!await resumeJob(trx, jobId)) throw new AppError('conflict', 'This job is not parked; somebody may have resumed it already.')
    return { result: { done: true as const }, subject: `job ${jobId}`, payload: {} }
  })
}

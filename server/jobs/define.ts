import type { z } from 'zod'
import type { AnalysisInput, AnalysisOutcome } from '../../shared/measurements/types'
import type { Deps } from '../platform/deps'
import type { Mailer } from '../platform/mailer'
import type { JobRow } from '../queries/jobs'

/** What a job may use beside the services' dependencies. */
export interface WorkerDeps extends Deps {
  /** Runs a measurement kind's analysis: in a thread pool in the worker process, directly in tests. */
  analyse: (input: AnalysisInput, signal: AbortSignal) => Promise<AnalysisOutcome>
  mailer: Mailer
}

export interface JobRun<P> {
  job: JobRow
  payload: P
  /** Stores how far it is, 0 to 1; the browser sees it within a second. */
  report: (fraction: number) => void
  /** Aborted when the lease is lost or the time limit of the kind is over. */
  signal: AbortSignal
}

/**
 * A kind of job: safe to run twice, because a worker can die after it stored its result and before it said so. `run` stores under a unique key and
 * calls finishJob in the same transaction, or returns with nothing stored, and then the worker marks the job done.
 */
export interface JobKind<S extends z.ZodType = z.ZodType> {
  kind: string
  payload: S
  /** Longest time one run may take. */
  limitSeconds: number
  run: (deps: WorkerDeps, run: JobRun<z.output<S>>) => Promise<void>
}

export const defineJob = <S extends z.ZodType>(job: JobKind<S>): JobKind<S> => job

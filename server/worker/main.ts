import { availableParallelism, hostname } from 'node:os'
import { fileURLToPath } from 'node:url'
import Piscina from 'piscina'
import { JOBS } from '../jobs/index'
import { runNextJob } from '../jobs/runJobs'
import type { WorkerDeps } from '../jobs/define'
import { smtpMailer } from '../platform/mailer'
import { beat } from '../queries/processes'
import { engineOf } from '../services/engine'
import { closeDeps, useDeps } from '../utils/deps'

const IDLE_MS = 300
const BEAT_MS = 5_000
const threads = Number(process.env.LANTHORN_WORKER_THREADS ?? Math.min(2, availableParallelism()))

const threadFile = fileURLToPath(new URL(import.meta.url.endsWith('.ts') ? './analyseThread.ts' : './analyseThread.mjs', import.meta.url))
const pool = new Piscina({ filename: threadFile, minThreads: 1, maxThreads: threads, idleTimeout: 30_000, execArgv: threadFile.endsWith('.ts') ? ['--import', 'tsx'] : [] })
const mailer = smtpMailer(process.env.SMTP_URL ?? 'smtp://127.0.0.1:1025', process.env.LANTHORN_MAIL_FROM ?? 'Lanthorn <lanthorn@localhost>')
const deps: WorkerDeps = { ...useDeps(), mailer, analyse: (input, signal) => pool.run(input, { signal }) }

let stopping = false
const stopped: Promise<void>[] = []
const name = `worker ${hostname()} ${process.pid}`
const startedAt = new Date()
const sayAlive = (): void => { beat(deps.db, { name, role: 'worker', startedAt, engine: engineOf(), wakePort: deps.ear.port() }).catch(report) }
sayAlive()
const heart = setInterval(sayAlive, BEAT_MS)

/** Each lane takes one job at a time; lanes run side by side, so that a mail does not wait for a long fit. */
async function lane(): Promise<void> {
  while (!stopping) {
    try {
      if (!await runNextJob(deps, JOBS)) await deps.ear.wait(IDLE_MS)
    }
    catch (error) {
      // The database is away or restarting: say so and try again, for jobs wait there safely.
      report(error)
      await new Promise(resolve => setTimeout(resolve, 2_000))
    }
  }
}

function report(error: unknown): void {
  console.error(JSON.stringify({ at: new Date().toISOString(), process: name, error: error instanceof Error ? error.stack : String(error) }))
}

async function stop(): Promise<void> {
  if (stopping) return
  stopping = true
  clearInterval(heart)
  await Promise.all(stopped)
  mailer.close()
  await pool.destroy()
  await closeDeps()
}

for (let i = 0; i < threads + 1; i++) stopped.push(lane())
for (const signal of ['SIGTERM', 'SIGINT'] as const) process.once(signal, () => { stop().catch(report) })
process.on('unhandledRejection', report)

import { existsSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { pathToFileURL } from 'node:url'
import { Worker } from 'node:worker_threads'
import { AppError } from '../../shared/errors'
import type { UploadDraft } from '../../shared/measurements/draft'
import { nothingRead } from '../../shared/measurements/tabular/readTable'
import { blocks } from '../../shared/measurements/tabular/problem'
import type { SheetFacts } from '../../shared/measurements/tabular/tubeSheet'
import type { Understood } from '../../shared/measurements/tabular/understood'

/** What a thread is told: the kind by its id, for functions cannot be sent. */
export interface TableJob { bytes: Uint8Array, kind: string, draft: UploadDraft, sheet: SheetFacts | null }

/** Reads large files and workbooks beside the process that answers people. A file that cannot be read is a problem of the file, not an exception. */
export interface TableReader { read: (job: TableJob) => Promise<Understood> }

export interface ThreadLimits { seconds: number, memoryMb: number, threads: number, waiting: number }
const LIMITS: ThreadLimits = { seconds: 20, memoryMb: 768, threads: 2, waiting: 20 }

/** Each file in a thread of its own with limits of time and memory: whatever it does there ends with the thread. */
export function threadReader(limits: ThreadLimits = LIMITS): TableReader {
  let running = 0
  const waiting: (() => void)[] = []
  return {
    async read(job) {
      if (waiting.length >= limits.waiting) throw new AppError('unavailable', 'Too many files are being read at this moment.', { accepted: 'the same again in a minute' })
      if (running >= limits.threads) await new Promise<void>((resolve) => { waiting.push(resolve) })
      else running++
      try {
        return await runThread(job, limits)
      }
      finally {
        // Whoever waits longest takes over this place.
        const next = waiting.shift()
        if (next) next()
        else running--
      }
    },
  }
}

async function runThread(job: TableJob, limits: ThreadLimits): Promise<Understood> {
  const worker = openThread(job, limits)
  try {
    return await answerOf(worker, limits)
  }
  finally {
    await worker.terminate()
  }
}

function answerOf(worker: Worker, { seconds, memoryMb }: ThreadLimits): Promise<Understood> {
  return new Promise((resolve, reject) => {
    const late = setTimeout(() => resolve(tooMuch(`Reading the file takes longer than ${seconds} s.`)), seconds * 1000)
    worker.once('message', (understood: Understood) => {
      clearTimeout(late)
      resolve(understood)
    })
    worker.once('error', (error: Error & { code?: string }) => {
      clearTimeout(late)
      if (error.code === 'ERR_WORKER_OUT_OF_MEMORY') resolve(tooMuch(`Reading the file needs more than ${memoryMb} MB of memory.`))
      else reject(error)
    })
    worker.once('exit', (code) => {
      clearTimeout(late)
      reject(new Error(`The thread that read a file ended with code ${code} and no answer.`))
    })
  })
}

const tooMuch = (message: string): Understood => nothingRead(blocks('tooMuchWork', message, 'the sheet with the measurement alone, as CSV, or the table in several files'))

/** Beside the built server; from its source, through the compiler that runs sources, in tests and while developing. */
function openThread(workerData: TableJob, { memoryMb }: ThreadLimits): Worker {
  const resourceLimits = { maxOldGenerationSizeMb: memoryMb }
  const built = join(dirname(process.argv[1] ?? ''), 'tableThread.mjs')
  if (existsSync(built)) return new Worker(built, { workerData, resourceLimits })
  const source = pathToFileURL(join(process.cwd(), 'server', 'worker', 'tableThread.ts')).href
  return new Worker(`import('tsx/esm/api').then(({ register }) => { register(); return import(${JSON.stringify(source)}) })`, { eval: true, workerData, resourceLimits })
}

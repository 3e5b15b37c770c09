import { existsSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { pathToFileURL } from 'node:url'
import { Worker } from 'node:worker_threads'
import { blocks } from '../../shared/measurements/tabular/problem'
import { WORKBOOK_LIMITS } from '../../shared/measurements/workbook/limits'
import type { WorkbookRead } from '../../shared/measurements/workbook/types'

/** Reads workbooks; the same bytes give the same cells. A file that cannot be read is a problem of the file, not an exception. */
export interface Workbooks {
  read: (bytes: Uint8Array) => Promise<WorkbookRead>
}

const MEMORY_MB = 512

/** Each workbook in a thread of its own with a limit of time and memory: what a file does there ends with the thread. */
export function threadWorkbooks(): Workbooks {
  return { read: bytes => runThread(bytes) }
}

async function runThread(bytes: Uint8Array): Promise<WorkbookRead> {
  const worker = openThread(bytes)
  try {
    return await answerOf(worker)
  }
  finally {
    await worker.terminate()
  }
}

function answerOf(worker: Worker): Promise<WorkbookRead> {
  return new Promise((resolve, reject) => {
    const late = setTimeout(() => resolve(tooMuch(`It takes longer than ${WORKBOOK_LIMITS.seconds} s to read.`)), WORKBOOK_LIMITS.seconds * 1000)
    worker.once('message', (read: WorkbookRead) => {
      clearTimeout(late)
      resolve(read)
    })
    worker.once('error', (error: Error & { code?: string }) => {
      clearTimeout(late)
      if (error.code === 'ERR_WORKER_OUT_OF_MEMORY') resolve(tooMuch('It needs more memory than a table of the largest size allowed.'))
      else reject(error)
    })
  })
}

const tooMuch = (message: string): WorkbookRead => ({ ok: false, problem: blocks('workbook', message, 'the sheet with the measurement saved as CSV, or a workbook with that sheet alone') })

/** Beside the built server; from its source, through the compiler that runs sources, in tests and while developing. */
function openThread(workerData: Uint8Array): Worker {
  const resourceLimits = { maxOldGenerationSizeMb: MEMORY_MB }
  const built = join(dirname(process.argv[1] ?? ''), 'workbookThread.mjs')
  if (existsSync(built)) return new Worker(built, { workerData, resourceLimits })
  const source = pathToFileURL(join(process.cwd(), 'server', 'worker', 'workbookThread.ts')).href
  return new Worker(`import('tsx/esm/api').then(({ register }) => { register(); return import(${JSON.stringify(source)}) })`, { eval: true, workerData, resourceLimits })
}

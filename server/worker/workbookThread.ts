import { parentPort, workerData } from 'node:worker_threads'
import { readWorkbook } from './readWorkbook'

/** One workbook in a thread of its own: bytes in, cells or a problem out. */
parentPort?.postMessage(await readWorkbook(workerData as Uint8Array))

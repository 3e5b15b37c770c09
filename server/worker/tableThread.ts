import { parentPort, workerData } from 'node:worker_threads'
import { measurement } from '../../shared/measurements/index'
import { readTable } from '../../shared/measurements/tabular/readTable'
import type { TableJob } from '../platform/tableReader'

/** One file in a thread of its own: bytes and choices in, what was understood out. */
const { bytes, kind, draft, sheet } = workerData as TableJob
parentPort?.postMessage(await readTable(bytes, { kind: measurement(kind), draft, sheet }))

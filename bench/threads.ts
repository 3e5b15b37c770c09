import { availableParallelism } from 'node:os'
import { fileURLToPath } from 'node:url'
import Piscina from 'piscina'
import { makeSeries } from './seriesInput'

const WORK_s = 5

/** Pure computing of about five seconds on one thread and on two, by the clock: the pool that the worker uses. */
export async function run(): Promise<void> {
  if (availableParallelism() < 2) {
    console.log('\nThreads: this machine has one core; left out.')
    return
  }
  const filename = fileURLToPath(new URL('../server/worker/analyseThread.ts', import.meta.url))
  const seconds = async (threads: number, jobs: number): Promise<number> => {
    const pool = new Piscina({ filename, minThreads: threads, maxThreads: threads, idleTimeout: 60_000, execArgv: ['--import', 'tsx'] })
    const input = makeSeries(192)
    await Promise.all(Array.from({ length: 6 * threads }, () => pool.run(input)))
    const begin = performance.now()
    await Promise.all(Array.from({ length: jobs }, () => pool.run(input)))
    const used = (performance.now() - begin) / 1000
    await pool.destroy()
    return used
  }
  const jobs = Math.max(8, Math.round(WORK_s / (await seconds(1, 8) / 8)))
  const [one, two] = [await seconds(1, jobs), await seconds(2, jobs)]
  console.log(`\nPure computing, ${jobs} analyses of 192 tubes\n  one thread ${one.toFixed(2)} s, two threads ${two.toFixed(2)} s: ×${(one / two).toFixed(2)} (asked: at least 1.7)`)
}

import { spawnSync } from 'node:child_process'
import { fileURLToPath } from 'node:url'
import { CONTESTANTS, recoveries, TI_S } from './t1'

// Ratios of medians over rounds that take turns in one run; rates on one machine say little, ratios more. Answers are compared before speed is.
const ROUNDS = 7
const FITS = 400
const median = (values: number[]): number => [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)]!

const signals = recoveries(FITS)
const rows = CONTESTANTS.map(one => ({ name: one.name, seconds: [] as number[], sum: 0 }))
for (let round = -2; round < ROUNDS; round++) {
  CONTESTANTS.forEach((one, i) => {
    const begin = process.cpuUsage()
    const sum = one.run(signals)
    const { user, system } = process.cpuUsage(begin)
    // The first rounds warm the compiler and do not count.
    if (round >= 0) rows[i]!.seconds.push((user + system) / 1e6)
    rows[i]!.sum = sum
  })
}
const scipy = spawnSync('python3', [fileURLToPath(new URL('./scipy_t1.py', import.meta.url))], {
  input: JSON.stringify({ x: TI_S, signals, rounds: 3 }), encoding: 'utf8', env: { ...process.env, OMP_NUM_THREADS: '1', OPENBLAS_NUM_THREADS: '1' },
})
if (scipy.status === 0) {
  const rounds = JSON.parse(scipy.stdout) as { seconds: number, sum: number }[]
  rows.push({ name: 'scipy curve_fit with Jacobian', seconds: rounds.map(one => one.seconds), sum: rounds[0]!.sum })
}
const slowest = Math.max(...rows.map(row => median(row.seconds)))
console.log(`T1 inversion recovery, 3 parameters, 12 points, ${FITS} fits a round`)
for (const row of rows) console.log(`${row.name.padEnd(46)} ${(FITS / median(row.seconds)).toFixed(0).padStart(8)} fits/s   ×${(slowest / median(row.seconds)).toFixed(1).padStart(6)}   sum of T1 ${row.sum.toPrecision(12)}`)
if (scipy.status !== 0) console.log('scipy is not installed (package python3-scipy): left out.')

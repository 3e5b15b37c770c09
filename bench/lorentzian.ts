import { spawnSync } from 'node:child_process'
import { fileURLToPath } from 'node:url'
import { fitLorentzians, type PoolStart } from '../shared/science/exchange/lorentzianFit'
import { lorentzianAt } from '../shared/science/exchange/lorentzianModel'
import { createRandom } from '../shared/science/random'
import { printRates, takeTurns, type Timed } from './rounds'

const COUNT = 40
const pool = (name: string, [depth, width_ppm, offset_ppm]: readonly [number, number, number], free: Pick<PoolStart, 'offsetRange_ppm' | 'widthRange_ppm' | 'depthRange'>) => ({ name, depth, width_ppm, offset_ppm, ...free })
const POOLS = [
  pool('water', [0.85, 1.2, 0], { offsetRange_ppm: [-1, 1], widthRange_ppm: [0.3, 10], depthRange: [0.02, 1] }),
  pool('broad', [0.1, 25, -1], { offsetRange_ppm: [-4, 4], widthRange_ppm: [10, 100], depthRange: [0, 1] }),
  pool('amide', [0.08, 0.7, 3.5], { offsetRange_ppm: [3, 4], widthRange_ppm: [0.3, 4], depthRange: [0, 0.5] }),
  pool('amine', [0.06, 0.7, 2], { offsetRange_ppm: [1.5, 2.6], widthRange_ppm: [0.3, 5], depthRange: [0, 0.5] }),
  pool('upfield', [0.08, 2, -3.5], { offsetRange_ppm: [-4.5, -2], widthRange_ppm: [0.5, 7], depthRange: [0, 0.5] }),
]

/** Five pools, 16 parameters, 101 offsets, with bounds and covariance, against scipy's curve_fit with and without bounds, with and without its Jacobian. */
export function run(): void {
  const random = createRandom('bench lorentzian')
  const x = Array.from({ length: 101 }, (_, i) => -8 + 0.16 * i)
  const about = (value: number, spread: number) => value * (1 + spread * (random.uniform() - 0.5))
  const signals = Array.from({ length: COUNT }, () => {
    const truth = POOLS.map(one => ({ depth: about(one.depth, 0.3), width_ppm: about(one.width_ppm, 0.2), offset_ppm: about(one.offset_ppm, 0.04) + (one.offset_ppm === 0 ? 0.1 * (random.uniform() - 0.5) : 0) }))
    return x.map(at => 1 - truth.reduce((sum, one) => sum + lorentzianAt(at, one), 0) + 5e-4 * random.normal())
  })
  const ours = takeTurns([{
    name: 'ours, within bounds, errors and criteria',
    run: () => signals.reduce((sum, z) => {
      const fit = fitLorentzians({ offset_ppm: x, z, zSe: null }, POOLS, { baseline: 'fitted' })
      if (!fit.ok) throw new Error(fit.message)
      return sum + fit.pools[2]!.depth.value + 1e-6 * (fit.pools[2]!.depth.se ?? 0)
    }, 0),
  }], { rounds: 41, warm: 60 })
  const side = (s: 0 | 1) => [s === 0 ? 0.5 : 1.2, ...POOLS.flatMap(one => [one.depthRange[s], one.widthRange_ppm[s], one.offsetRange_ppm[s]])]
  const given = { x, signals, start: [1, ...POOLS.flatMap(one => [one.depth, one.width_ppm, one.offset_ppm])], lower: side(0), upper: side(1), rounds: 7 }
  const answer = spawnSync('/usr/bin/python3', [fileURLToPath(new URL('./scipy_lorentzian.py', import.meta.url))], { input: JSON.stringify(given), encoding: 'utf8', env: { ...process.env, OPENBLAS_NUM_THREADS: '1' } })
  if (answer.status !== 0) {
    console.log('  (python3 with scipy is not here: no comparison)')
    printRates('Five Lorentzian pools, 16 parameters, 101 offsets', ours, { count: COUNT })
    return
  }
  for (const other of JSON.parse(answer.stdout) as Timed[]) {
    const goal = other.name.endsWith('given') ? 4 : 12
    printRates(`Five Lorentzian pools, 16 parameters, 101 offsets, against ${other.name}`, [...ours, other], { count: COUNT, goals: { [ours[0]!.name]: goal } })
  }
}

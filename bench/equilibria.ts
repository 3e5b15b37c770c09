import { spawnSync } from 'node:child_process'
import { fileURLToPath } from 'node:url'
import { followPath } from '../shared/science/equilibria/continuation'
import type { TotalComponent, Species } from '../shared/science/equilibria/system'

/** Eight components (three metals, four ligands, protons) and forty species with constants like those of real ones: 3 × 4 complexes, their protonated forms, hydroxides. */
export function ladder(): { components: TotalComponent[], species: Species[] } {
  const metals = ['Ma', 'Mb', 'Mc']
  const ligands = ['La', 'Lb', 'Lc', 'Ld']
  const species: Species[] = []
  const add = (name: string, logBeta: number, stoichiometry: Record<string, number>) => { species.push({ name, logBeta, stoichiometry }) }
  ligands.forEach((ligand, i) => [10.2 - i, 18.6 - 2 * i, 22.9 - 2 * i].forEach((beta, j) => add(`H${j + 1}${ligand}`, beta, { [ligand]: 1, H: j + 1 })))
  metals.forEach((metal, a) => ligands.forEach((ligand, i) => {
    add(`${metal}${ligand}`, 20 - 3 * a - 2 * i, { [metal]: 1, [ligand]: 1 })
    if (i < 3) add(`${metal}H${ligand}`, 23 - 3 * a - 2 * i, { [metal]: 1, [ligand]: 1, H: 1 })
  }))
  metals.forEach((metal, a) => add(`${metal}OH`, -7.9 - a, { [metal]: 1, H: -1 }))
  add('Ma2La', 23, { Ma: 2, La: 1 })
  add('MaLb2', 24, { Ma: 1, Lb: 2 })
  add('MbLc2', 18, { Mb: 1, Lc: 2 })
  add('OH', -13.78, { H: -1 })
  const totals = { Ma: 1e-3, Mb: 5e-4, Mc: 2e-3, La: 1e-3, Lb: 2e-3, Lc: 1e-4, Ld: 5e-3 }
  return { components: Object.entries(totals).map(([name, total_M]) => ({ name, total_M })), species }
}

const median = (values: readonly number[]): number => [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)]!
const grid = (count: number): number[] => Array.from({ length: count }, (_, i) => 2 + 10 * i / (count - 1))

function secondsFor(count: number): { seconds: number, steps: readonly number[], balanceError: number, sum: number } {
  const { components, species } = ladder()
  const begin = process.cpuUsage()
  const path = followPath({ components, species }, { kind: 'pcH', values: grid(count) })
  const { user, system } = process.cpuUsage(begin)
  if (!path.ok) throw new Error(path.message)
  return { seconds: (user + system) / 1e6, steps: path.steps, balanceError: path.balanceError, sum: path.species_M.Ma!.reduce((sum, x) => sum + Math.log10(x), 0) }
}

/** 8 components × 40 species × 200 pH points against scipy.optimize.root with Jacobian on the same balances. */
export function run(): void {
  const time = (count: number, rounds: number) => Array.from({ length: rounds + 20 }, () => secondsFor(count)).slice(20)
  const ours = time(200, 41)
  const seconds = median(ours.map(one => one.seconds))
  const longer = median(time(2000, 9).map(one => one.seconds))
  const { steps, balanceError, sum } = ours[0]!
  console.log('Speciation, 8 components, 40 species, 200 pH points')
  console.log(`ours ${(1e3 * seconds).toFixed(2)} ms   Newton steps a point: median ${median(steps)}, worst ${Math.max(...steps.slice(1))}, first ${steps[0]}   balance ${balanceError.toExponential(1)}   2000 points cost ×${(longer / seconds).toFixed(1)}   sum ${sum.toPrecision(12)}`)
  const scipy = spawnSync('python3', [fileURLToPath(new URL('./scipy_speciation.py', import.meta.url))], {
    input: JSON.stringify({ ...ladder(), pcH: grid(200), rounds: 3 }), encoding: 'utf8', env: { ...process.env, OMP_NUM_THREADS: '1', OPENBLAS_NUM_THREADS: '1' },
  })
  if (scipy.status !== 0) {
    console.log('scipy is not installed (package python3-scipy): left out.')
    return
  }
  const theirs = JSON.parse(scipy.stdout) as Record<'continued' | 'alone', { seconds: number[], residual: number, failed: number, sum: number }>
  for (const [words, one] of [['each point from the one before', theirs.continued], ['each point from the totals', theirs.alone]] as const) {
    console.log(`scipy.optimize.root with Jacobian, ${words}: ${(1e3 * median(one.seconds)).toFixed(0)} ms   largest relative balance ${one.residual.toExponential(1)}   points not met ${one.failed}   sum ${one.sum.toPrecision(12)}   ratio ×${(median(one.seconds) / seconds).toFixed(0)}`)
  }
}

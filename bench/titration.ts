import { spawnSync } from 'node:child_process'
import { readFileSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import type { VolumetricCurve } from '../shared/science/titration/curves'
import { refineConstants, type TitrationSystem } from '../shared/science/titration/refine'

const FILE = new URL('../fixtures/reference/titration/curves.json', import.meta.url)
const stored = JSON.parse(readFileSync(FILE, 'utf8')) as { true: Record<string, number>, pKw: number, curves: Omit<VolumetricCurve, 'kind'>[] }
const NAMES = ['HL', 'H2L', 'H3L', 'ML']
const POWERS: readonly Record<string, number>[] = [{ L: 1, H: 1 }, { L: 1, H: 2 }, { L: 1, H: 3 }, { M: 1, L: 1 }]
const OFF = 0.5

/** 3 curves × 60 points × 4 constants, started half a unit off, weights brought up to date; against scipy least_squares over the same Newton solver in numpy. */
export function run(): void {
  const curves = stored.curves.map((one): VolumetricCurve => ({ ...one, kind: 'volumetric' }))
  const system: TitrationSystem = {
    components: ['M', 'L', 'H'], refine: NAMES,
    species: [{ name: 'OH', stoichiometry: { H: -1 }, logBeta: -stored.pKw }, ...NAMES.map((name, j) => ({ name, stoichiometry: POWERS[j]!, logBeta: stored.true[name]! + OFF }))],
  }
  const seconds: number[] = []
  let told = ''
  for (let round = -30; round < 31; round++) {
    const begin = process.cpuUsage()
    const fit = refineConstants(system, curves)
    const used = process.cpuUsage(begin)
    if (!fit.ok) throw new Error(fit.message)
    if (round >= 0) seconds.push((used.user + used.system) / 1e6)
    told = fit.constants.map(one => one.logBeta.toFixed(6)).join(' ')
  }
  const median = (values: readonly number[]) => [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)]!
  console.log(`Titrations, 3 curves, 60 points, 4 constants\nours, weights and errors included ${(1e3 * median(seconds)).toFixed(1)} ms   ${told}`)
  const scipy = spawnSync('python3', [fileURLToPath(new URL('./scipy_titration.py', import.meta.url)), fileURLToPath(FILE), String(OFF)], {
    encoding: 'utf8', env: { ...process.env, OMP_NUM_THREADS: '1', OPENBLAS_NUM_THREADS: '1' },
  })
  if (scipy.status !== 0) {
    console.log('scipy is not installed (package python3-scipy): left out.')
    return
  }
  const theirs = JSON.parse(scipy.stdout) as Record<'singly' | 'together', { seconds: number[], logBeta: number[] }>
  for (const [words, one] of [['solver point by point', theirs.singly], ['solver on whole curves at once', theirs.together]] as const) {
    console.log(`scipy least_squares, numpy ${words} ${(1e3 * median(one.seconds)).toFixed(0)} ms   ${one.logBeta.map(x => x.toFixed(6)).join(' ')}   ratio ×${(median(one.seconds) / median(seconds)).toFixed(1)}`)
  }
}

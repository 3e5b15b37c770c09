import { spawnSync } from 'node:child_process'
import { fileURLToPath } from 'node:url'
import { levenbergMarquardt } from 'ml-levenberg-marquardt'
import { fitModel } from '../shared/science/least-squares/fitModel'
import { projectQuickly, solveQuickly, type QuickFit } from '../shared/science/least-squares/quick'
import { createSearches, prepareSeparable } from '../shared/science/least-squares/varpro'
import type { Model } from '../shared/science/models/define'
import { inversionRecovery3 } from '../shared/science/models/inversionRecovery3'
import { multiEcho } from '../shared/science/models/multiEcho'
import { createRandom } from '../shared/science/random'
import { printRates, takeTurns, type Contestant, type Timed } from './rounds'

interface Case {
  title: string
  model: Model
  x: number[]
  start: number[]
  /** Which parameter is summed. */
  at: number
  truth: (uniform: number) => number[]
  noise: number
  goals: { general: number, projection: number }
}

const CASES: readonly Case[] = [
  {
    title: 'T1, inversion recovery, 3 parameters, 12 points, with covariance', model: inversionRecovery3 as Model, x: [0.03, 0.06, 0.11, 0.18, 0.28, 0.42, 0.62, 0.9, 1.3, 2, 3.2, 5], start: [1000, -1900, 0.5], at: 2,
    truth: uniform => [1000, -1940, 0.1 * 20 ** uniform], noise: 4, goals: { general: 40, projection: 100 },
  },
  {
    title: 'T2, 2 parameters, 32 echoes, with covariance', model: multiEcho as Model, x: Array.from({ length: 32 }, (_, i) => 0.01 * (i + 1)), start: [900, 0.08], at: 1,
    truth: uniform => [1000, 0.04 * 5 ** uniform], noise: 4, goals: { general: 35, projection: 50 },
  },
]
const FITS = 2000

/** Small fits by our engine against scipy's curve_fit with its Jacobian, and ml-levenberg-marquardt, which reports no errors. */
export function run(): void {
  for (const one of CASES) {
    const random = createRandom(`bench ${one.model.id}`)
    const signals = Array.from({ length: FITS }, () => {
      const truth = Float64Array.from(one.truth(random.uniform()))
      const gradient = new Float64Array(4)
      return one.x.map(at => one.model.valueAndGradient(at, truth, {}, gradient) + one.noise * random.normal())
    })
    const rows = [...takeTurns(contestants(one, signals)), ...scipyRow(one, signals)]
    printRates(one.title, rows, { count: FITS, goals: { 'ours, start given': one.goals.general, 'ours, by projection, no start': one.goals.projection } })
  }
}

function contestants({ model, x, start, at }: Case, signals: readonly number[][]): Contestant[] {
  const search = prepareSeparable(model, x, null, {})
  if (search === null) throw new Error(`${model.id} cannot be projected.`)
  const searches = createSearches()
  const dof = x.length - start.length
  const sum = (fit: (y: number[]) => number) => signals.reduce((total, y) => total + fit(y), 0)
  // Parameters and standard errors, as curve_fit gives them.
  const answer = (fit: QuickFit | null): number => {
    if (fit === null) throw new Error('A fit of the bench was not plain.')
    const se = Math.sqrt((fit.inverse[at * start.length + at] ?? Number.NaN) * fit.sumOfSquares / dof)
    return (fit.parameters[at] ?? Number.NaN) + 1e-6 * se
  }
  const reported = (outcome: ReturnType<typeof fitModel>): number => {
    if (!outcome.ok) throw new Error(outcome.message)
    const parameter = outcome.parameters[at]
    return (parameter?.value ?? Number.NaN) + 1e-6 * (parameter?.se ?? Number.NaN)
  }
  const names = Object.fromEntries(model.names.map((name, j) => [name, start[j] ?? Number.NaN]))
  return [
    { name: 'ours, by projection, no start', run: () => sum(y => answer(projectQuickly(model, { x, y, weights: null, settings: {} }, search))) },
    { name: 'ours, start given', run: () => sum(y => answer(solveQuickly(model, { x, y, weights: null, settings: {} }, start))) },
    { name: 'ours, whole report, by projection', run: () => sum(y => reported(fitModel(model, { x, y }, { searches }))) },
    { name: 'ours, whole report, start given', run: () => sum(y => reported(fitModel(model, { x, y }, { start: names }))) },
    {
      name: 'ml-levenberg-marquardt, no errors, 1 fit in 10', run: () => signals.filter((_, i) => i % 10 === 0).reduce((total, y) => total + (levenbergMarquardt({ x, y }, p => (value) => { const g = new Float64Array(4); return model.valueAndGradient(value, p, {}, g) }, {
        initialValues: start, gradientDifference: 1e-6, maxIterations: 200, errorTolerance: 1e-9, damping: 1e-2,
      }).parameterValues[at] ?? Number.NaN), 0),
    },
  ]
}

function scipyRow({ model, x, start }: Case, signals: readonly number[][]): Timed[] {
  const scipy = spawnSync('/usr/bin/python3', [fileURLToPath(new URL('./scipy_small.py', import.meta.url))], {
    input: JSON.stringify({ model: model.id, x, start, signals, rounds: 5 }), encoding: 'utf8', maxBuffer: 1e8, env: { ...process.env, OMP_NUM_THREADS: '1', OPENBLAS_NUM_THREADS: '1' },
  })
  if (scipy.status !== 0) {
    console.log('scipy is not installed (package python3-scipy): left out.')
    return []
  }
  const rounds = JSON.parse(scipy.stdout) as { seconds: number, answer: number }[]
  return [{ name: 'scipy curve_fit with its Jacobian', seconds: rounds.map(one => one.seconds), answer: rounds[0]?.answer ?? Number.NaN }]
}

import { levenbergMarquardt } from 'ml-levenberg-marquardt'
import { fitModel } from '../shared/science/least-squares/fitModel'
import { inversionRecovery3 } from '../shared/science/models/inversionRecovery3'
import { createRandom } from '../shared/science/random'

export const TI_S = [0.03, 0.06, 0.11, 0.18, 0.28, 0.42, 0.62, 0.9, 1.3, 2, 3.2, 5] as const

/** Seeded inversion recoveries, 12 points, T1 from 0.1 to 2 s, noise 0.4 %. */
export function recoveries(count: number): number[][] {
  const random = createRandom('bench-t1')
  return Array.from({ length: count }, () => {
    const t1_s = 0.1 * 20 ** random.uniform()
    return TI_S.map(ti => 1000 - 1940 * Math.exp(-ti / t1_s) + 4 * random.normal())
  })
}

export type Contestant = { name: string, run: (signals: readonly number[][]) => number }

/** The same fits three ways; each returns the sum of its T1, so that equal answers show. */
export const CONTESTANTS: readonly Contestant[] = [
  {
    name: 'ours: full report, start by projection',
    run: signals => signals.reduce((sum, y) => sum + t1Of(fitModel(inversionRecovery3, { x: [...TI_S], y })), 0),
  },
  {
    name: 'ours: full report, start given',
    run: signals => signals.reduce((sum, y) => sum + t1Of(fitModel(inversionRecovery3, { x: [...TI_S], y }, { start: { a_au: 1000, b_au: -1900, t1_s: 0.5 } })), 0),
  },
  {
    name: 'ml-levenberg-marquardt, no errors reported',
    run: signals => signals.reduce((sum, y) => sum + levenbergMarquardt({ x: [...TI_S], y }, ([a, b, t1]) => ti => a! + b! * Math.exp(-ti / t1!), {
      initialValues: [1000, -1900, 0.5], gradientDifference: 1e-6, maxIterations: 200, errorTolerance: 1e-9, damping: 1e-2,
    }).parameterValues[2]!, 0),
  },
]

function t1Of(outcome: ReturnType<typeof fitModel>): number {
  if (!outcome.ok) throw new Error(outcome.message)
  return outcome.parameters.find(one => one.name === 't1_s')!.value
}

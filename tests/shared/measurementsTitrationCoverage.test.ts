import { describe, expect, it } from 'vitest'
import { thermoTitration } from '#shared/measurements/titration/titration'
import { DEMO_TITRATIONS, titrationText } from '../../db/seeds/demo/titrations'
import { done, inputFrom } from '../support/kineticsTables'

const SETS = process.env.LANTHORN_TEST === 'full' ? 2000 : 200
const [demo] = DEMO_TITRATIONS
const KNOWN: Readonly<Record<string, number>> = { logK: demo!.logK, protonStep1: demo!.steps[0]!, protonStep2: demo!.steps[1]! }
const every = (n: number, list: readonly number[]): number[] => list.filter((_, i) => i % n === 0)

/** Sets of a calibration, a ligand and flasks, each with noise of its own on every reading and burette. */
function intervals(run: number, options: Record<string, string>): [string, boolean][] {
  const file = { ...demo!, fileName: `coverage-${run}`, head: [...demo!.head, 'log K: 13'], curves: demo!.curves.map(curve => ({ ...curve, acids_mM: every(2, curve.acids_mM), added_mL: every(2, curve.added_mL) })) }
  const { series } = done(thermoTitration, inputFrom(thermoTitration, titrationText(file).trimEnd().split('\n'), { options }))
  return series.parameters.flatMap(({ name, interval }) => name in KNOWN ? [[name, interval![0] < KNOWN[name]! && KNOWN[name]! < interval![1]] as [string, boolean]] : [])
}

describe('intervals of constants, the calibration simulated with the rest [seeded]', () => {
  it(`hold the true constants in about 95 % of ${SETS} sets`, () => {
    const inside = new Map(Object.keys(KNOWN).map(name => [name, 0]))
    for (let run = 0; run < SETS; run++) for (const [name, holds] of intervals(run, {})) inside.set(name, inside.get(name)! + Number(holds))
    // ±4 binomial standard deviations of 0.95, whatever the seed
    const slack = 4 * Math.sqrt(0.95 * 0.05 / SETS)
    for (const [name, count] of inside) {
      expect(count / SETS, name).toBeGreaterThan(0.95 - slack)
      expect(count / SETS, name).toBeLessThan(0.95 + slack)
    }
  }, 600_000)
})
